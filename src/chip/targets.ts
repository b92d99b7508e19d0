import { isPattern, matches } from '../runsheet/names.ts';
import { pathText } from '../runsheet/path-text.ts';
import { quote, quoteSome } from '../runsheet/quote.ts';
import type { RunSheet } from '../runsheet/types.ts';
import { refuse } from './complain.ts';

/**
 * The sheet with the one name that is meant in place of each pattern under `targets`. Names in full stay as they are, and
 * so do patterns that match nothing (refused as unknown names) and those on nodes, which the network names.
 * @throws InputError when a pattern matches several
 */
export function withTargetsNamed(
  sheet: RunSheet,
  channels: ReadonlySet<string>,
  ports: ReadonlySet<string>,
): RunSheet {
  const named = <T extends RunSheet['targets' | 'concentrationTargets'][number]>(target: T): T => {
    const { index, on, name } = target;
    if (on === 'node' || !isPattern(name)) return target;
    const known = on === 'channel' ? channels : ports;
    if (known.has(name)) return target;
    const found = [...known].filter((candidate) => matches(name, candidate));
    if (found.length > 1) refuseSeveral(sheet, ['targets', index, on], name, on, found);
    return found.length === 1 ? { ...target, name: found[0] } : target;
  };
  return {
    ...sheet,
    targets: sheet.targets.map(named),
    concentrationTargets: sheet.concentrationTargets.map(named),
  };
}

/** Stops at a pattern that is to name one thing and names several. */
export function refuseSeveral(
  sheet: RunSheet,
  path: readonly (string | number)[],
  pattern: string,
  what: string,
  found: readonly string[],
): never {
  return refuse(
    sheet,
    path,
    `${pathText(path)}: ${quote(pattern)} matches ${found.length} ${what}s, ${quoteSome(found, 5)}; a target is on one: name it in full`,
  );
}
