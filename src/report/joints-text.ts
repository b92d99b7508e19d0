import { countText } from '../findings/words.ts';
import type { JointSummary } from '../network/joint-types.ts';

const UNCOMPUTED = ' not computed';

/**
 * "14 of 20 joints computed (12 T of equal ducts, 2 mitred corner); not computed: 6 T of unequal ducts". Entries from wells are no
 * joints of the drawing's; null where it has none.
 */
export function jointsText(joints: readonly JointSummary[]): string | null {
  const own = joints.filter(({ kind }) => kind !== 'entry from a well');
  const total = countOf(own);
  if (total === 0) return null;
  const computed = own.filter((joint) => joint.computed);
  const others = own.filter((joint) => !joint.computed);
  const done = `${countOf(computed)} of ${countText(total, 'joint')} computed${computed.length === 0 ? '' : ` (${listOf(computed)})`}`;
  return others.length === 0 ? done : `${done}; not computed: ${listOf(others)}`;
}

function countOf(joints: readonly JointSummary[]): number {
  return joints.reduce((sum, { count }) => sum + count, 0);
}

function listOf(joints: readonly JointSummary[]): string {
  return joints.map(({ kind, count }) => `${count} ${kind.replace(UNCOMPUTED, '')}`).join(', ');
}
