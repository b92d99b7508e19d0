import { quote } from './quote.ts';

/** Where in a run sheet something stands: keys, and indices of lists from 0. */
export type KeyPath = readonly (string | number)[];

/** `ports.feed.pressure`, `targets[0].by`; names with other signs than letters, digits, _, - and * are quoted. */
export function pathText(path: KeyPath): string {
  let shown = '';
  for (const step of path) {
    if (typeof step === 'number') shown += `[${step}]`;
    else shown += `${shown === '' ? '' : '.'}${/^[\p{L}\p{N}_*-]{1,60}$/u.test(step) ? step : quote(step)}`;
  }
  return shown === '' ? 'run sheet' : shown;
}
