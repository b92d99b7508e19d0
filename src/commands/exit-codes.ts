/** What the program ends with. */
export const EXIT = {
  ready: 0,
  hold: 1,
  unusable: 2,
  notWritten: 3,
  bug: 70,
  interrupted: 130,
} as const;

const MEANINGS: Readonly<Record<keyof typeof EXIT, string>> = {
  ready: 'ready: no blocker',
  hold: 'hold: at least one blocker',
  unusable: 'the layout, run sheet or command line could not be used',
  notWritten: 'a report could not be written',
  bug: 'a bug in rillcheck',
  interrupted: 'interrupted',
};

/** The list at the end of every help text. */
export const EXIT_CODES = `
Exit codes:
${Object.entries(EXIT)
  .map(([key, code]) => `  ${String(code).padEnd(5)}${MEANINGS[key as keyof typeof EXIT]}`) // Object.entries widens the keys
  .join('\n')}`;
