import { InputError } from '../errors.ts';
import type { Detail } from '../report/json.ts';
import type { MapQuantity } from '../report/reach-values.ts';

export const FORMATS = ['pdf', 'svg', 'csv', 'json'] as const;
export type Format = (typeof FORMATS)[number];

/** What commander hands over for the commands that read a layout. */
export interface LayoutOptions {
  readonly run?: string;
  readonly case?: string;
  readonly out: string;
  readonly formats?: string;
  readonly json?: true;
  readonly detail: Detail;
  readonly quiet?: true;
  readonly colour: MapQuantity;
  readonly paper: 'a4' | 'letter';
  /** False with --no-color. */
  readonly color: boolean;
}

/** The report formats asked for. Errors: InputError for a word that is no format. */
export function formatsOf(options: Pick<LayoutOptions, 'formats' | 'json'>): readonly Format[] {
  const text = options.formats ?? (options.json === true ? 'none' : 'pdf,svg');
  const words = text
    .split(',')
    .map((word) => word.trim().toLowerCase())
    .filter((word) => word !== '');
  if (words.length === 1 && words[0] === 'none') return [];
  const wanted = new Set<Format>();
  for (const word of words) {
    const format = FORMATS.find((known) => known === word);
    if (format === undefined) {
      throw new InputError(
        '--formats',
        `"${word}" is no format; write a list of ${FORMATS.join(', ')}, or none`,
      );
    }
    wanted.add(format);
  }
  if (wanted.size === 0)
    throw new InputError('--formats', `the list is empty; write a list of ${FORMATS.join(', ')}, or none`);
  return FORMATS.filter((format) => wanted.has(format));
}
