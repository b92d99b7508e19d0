import { InputError } from '../errors.ts';
import type { Group, Shape } from './types.ts';
import { quoted } from './value-error.ts';

/**
 * Refuses a drawing in which two shapes, or two groups, that are written differently go by one name once an editor's
 * escapes are read: which of them a run sheet means could not be told. Costs nothing while nothing is escaped.
 * @param escaped what goes by another name than it is written with, and how it is written.
 * @throws InputError naming both.
 */
export function refuseEscapedTwins(
  shapes: readonly Shape[],
  escaped: ReadonlyMap<Shape | Group, string>,
  where: string,
): void {
  if (escaped.size === 0) return;
  const shapeNames = new Map<string, string>();
  const groupNames = new Map<string, string>();
  const seen = new Set<Group>();
  const add = (names: Map<string, string>, what: string, key: string, written: string): void => {
    const before = names.get(key);
    if (before === undefined) names.set(key, written);
    else if (before !== written) {
      throw new InputError(
        where,
        `${what} ${quoted(before)} and ${quoted(written)} have one name, ${quoted(key)}, once the escapes that an editor wrote are read; give one of them another name`,
      );
    }
  };
  for (const shape of shapes) {
    if (shape.name !== null) add(shapeNames, 'the shapes', shape.name, escaped.get(shape) ?? shape.name);
    for (const group of shape.groups) {
      if (group.name === null || seen.has(group)) continue;
      seen.add(group);
      add(groupNames, 'the groups', group.name, escaped.get(group) ?? group.name);
    }
  }
}
