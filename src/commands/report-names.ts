import type { Report } from '../report/report.ts';

/** Names of the files of one run: `NAME[.COMMAND][.case-CASE].EXT`. */
export interface ReportNames {
  /** Of a file on everything that was looked at. Of one case where the sheet has more, so that it never stands for the whole. */
  readonly whole: (extension: string) => string;
  /** Of a file on one case: its place in the report. */
  readonly ofCase: (index: number, extension: string) => string;
}

/**
 * @param name the layout's, or the run sheet's where it is not the layout's own
 * @param command null for check, whose reports are the layout's own
 */
export function reportNames(
  name: string,
  command: 'pump' | 'spread' | null,
  { cases, sheetCases }: Pick<Report, 'cases' | 'sheetCases'>,
): ReportNames {
  const stem = command === null ? name : `${name}.${command}`;
  const parts = caseParts(sheetCases);
  const ofCase = (index: number, extension: string): string => {
    const { name: caseName } = cases[index];
    return caseName === null ? `${stem}.${extension}` : `${stem}${parts.get(caseName)}.${extension}`;
  };
  const isPart = cases.length === 1 && sheetCases.length > 1;
  return {
    whole: (extension) => (isPart ? ofCase(0, extension) : `${stem}.${extension}`),
    ofCase,
  };
}

/**
 * `.case-seed` for each case of the sheet. A case name is data, so only its harmless characters name a file; names that come out
 * alike, also to a file system that does not tell upper from lower case, are numbered.
 */
function caseParts(names: readonly string[]): ReadonlyMap<string, string> {
  const taken = new Set<string>();
  const parts = new Map<string, string>();
  for (const name of names) {
    const own = `.case-${name.replace(/[^\p{L}\p{N}_-]+/gu, '_').slice(0, MAX_CASE_CHARACTERS)}`;
    let free = own;
    for (let i = 2; taken.has(free.toLowerCase()); i++) free = `${own}-${i}`;
    taken.add(free.toLowerCase());
    parts.set(name, free);
  }
  return parts;
}

/** A file name may have 255 bytes in all, and a letter up to four. */
const MAX_CASE_CHARACTERS = 40;
