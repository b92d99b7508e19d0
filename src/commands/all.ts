/**
 * Every command in one module: what they share is nearly everything, and one large file loads faster than the two dozen
 * small ones that splitting by command would make. Help and version do not load it; the PDF and SVG writers load by themselves.
 */
export { check } from './check.ts';
export { draft } from './draft.ts';
export { pump } from './pump.ts';
export { section } from './section.ts';
export { spread } from './spread.ts';
