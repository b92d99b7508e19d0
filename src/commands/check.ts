import type { Io } from './io.ts';
import type { LayoutOptions } from './options.ts';
import { reportLayout, verdictCode } from './report-layout.ts';

/** `rillcheck check`: read, check, solve and report; returns the exit code. */
export async function check(layoutPath: string, options: LayoutOptions, io: Io): Promise<number> {
  return verdictCode(await reportLayout(layoutPath, options, io));
}
