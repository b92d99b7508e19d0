/** The JSON Schemas that ship with the program, each from the one description that also checks the data. */
export { resultJsonSchema } from './report/result-json-schema.ts';
export { runSheetJsonSchema } from './runsheet/json-schema.ts';
