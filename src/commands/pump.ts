import { pumpText } from '../report/pump-text.ts';
import type { Io } from './io.ts';
import type { LayoutOptions } from './options.ts';
import { reportLayout, verdictCode } from './report-layout.ts';

/** `rillcheck pump`: the settings that meet the run sheet's targets, and everything that a check says at those settings. */
export async function pump(layoutPath: string, options: LayoutOptions, io: Io): Promise<number> {
  return verdictCode(
    await reportLayout(layoutPath, options, io, {
      command: 'pump',
      options: { pump: true },
      noRunSheet:
        'there is no such run sheet; pump needs one with targets: write one with: rillcheck draft LAYOUT',
      text: pumpText,
    }),
  );
}
