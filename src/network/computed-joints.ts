import { crossK, stepK, teeEqualK, teeIntoWideK } from '../physics/joints.ts';
import { type Arm, angleBetween } from './arms.ts';
import { isEqualDuct, isEqualSize } from './equal-ducts.ts';
import type { JointKind } from './joint-types.ts';
import { TRIM_NOTHING, TRIM_TO_WALL } from './trims.ts';
import { ANGLE_TOLERANCE_RAD } from './turns.ts';

/** Meeting points of two joints nearer than this many widths along the duct are no longer two joints by themselves. */
export const APART_WIDTHS = 1.98;

/** What a computed joint does to one arm. */
export interface Part {
  readonly arm: Arm;
  readonly lengthMm: number;
  readonly boundMm: number;
  /** Least distance to the next joint along this arm, mm. */
  readonly apartMm: number;
  /** Distance from the node to the wall that the arm's length runs to, mm. */
  readonly wallMm: number;
}

/** A joint that was computed. */
export interface Computed {
  readonly kind: JointKind;
  /** How rule 5 is applied there. */
  readonly trimming: number;
  readonly parts: readonly Part[];
}

/** The computed case that a node of these arms is, had its arms room enough; null where nobody computed it. */
export function computedJoint(arms: readonly Arm[]): Computed | null {
  switch (arms.length) {
    case 2:
      return twoArms(arms);
    case 3:
      return threeArms(arms);
    case 4:
      return fourArms(arms);
    default:
      return null;
  }
}

function toPart(arm: Arm, k: number, error: number, widthMm: number, wallMm = 0): Part {
  const own = arm.channel.ductWidthMm;
  return {
    arm,
    lengthMm: k * widthMm,
    boundMm: error * widthMm,
    // From a wall the meeting point of equal ducts would lie half a width further in.
    apartMm: APART_WIDTHS * own - (wallMm > 0 ? own / 2 : 0),
    wallMm,
  };
}

/** A collinear step in width. */
function twoArms(arms: readonly Arm[]): Computed | null {
  const [one, two] = arms;
  if (!isOfOneDepth(arms) || Math.PI - angleBetween(one, two) > ANGLE_TOLERANCE_RAD) return null;
  const [narrow, wide] = one.channel.ductWidthMm <= two.channel.ductWidthMm ? [one, two] : [two, one];
  const width = narrow.channel.ductWidthMm;
  const { k, error } = stepK(width / narrow.channel.depthMm, wide.channel.ductWidthMm / width);
  return {
    kind: 'step in width',
    trimming: TRIM_NOTHING,
    parts: [toPart(narrow, k, error, width), toPart(wide, 0, 0, width)],
  };
}

/** A T: a main straight through and a side at right angles, no wider than the main. */
function threeArms(arms: readonly Arm[]): Computed | null {
  const [mainA, mainB, side] = asTee(arms);
  if (!isOfOneDepth(arms) || !isSquareTee(arms)) return null;
  if (!isEqualSize(mainA.channel.ductWidthMm, mainB.channel.ductWidthMm)) return null;
  const width = side.channel.ductWidthMm;
  const mainWidth = mainA.channel.ductWidthMm;
  const aspect = width / side.channel.depthMm;
  if (isEqualSize(width, mainWidth)) {
    const { main, side: k, error } = teeEqualK(aspect);
    return {
      kind: 'T of equal ducts',
      trimming: TRIM_NOTHING,
      parts: [
        toPart(mainA, main, error, width),
        toPart(mainB, main, error, width),
        toPart(side, k, error, width),
      ],
    };
  }
  if (width > mainWidth) return null;
  const { mainHalf, side: k, error } = teeIntoWideK(aspect, mainWidth / width);
  return {
    kind: 'T into a wider main',
    trimming: TRIM_TO_WALL,
    parts: [
      toPart(mainA, mainHalf, error, width),
      toPart(mainB, mainHalf, error, width),
      toPart(side, k, error, width, mainA.channel.stripHalfWidthMm),
    ],
  };
}

export function isOfOneDepth(arms: readonly Arm[]): boolean {
  return arms.every(({ channel }) => isEqualSize(channel.depthMm, arms[0].channel.depthMm));
}

/** A main straight through and a side at right angles, of whatever widths and depths. */
export function isSquareTee(arms: readonly Arm[]): boolean {
  const [mainA, mainB, side] = asTee(arms);
  if (Math.PI - angleBetween(mainA, mainB) > ANGLE_TOLERANCE_RAD) return false;
  return [mainA, mainB].every(
    (main) => Math.abs(angleBetween(main, side) - Math.PI / 2) <= ANGLE_TOLERANCE_RAD,
  );
}

/** The two arms that are most nearly straight on first, the third last. */
function asTee(arms: readonly Arm[]): readonly [Arm, Arm, Arm] {
  const [a, b, c] = arms;
  const ab = angleBetween(a, b);
  const bc = angleBetween(b, c);
  const ca = angleBetween(c, a);
  if (ab >= bc && ab >= ca) return [a, b, c];
  return bc >= ca ? [b, c, a] : [c, a, b];
}

/** A right-angled cross of four equal ducts. */
function fourArms(arms: readonly Arm[]): Computed | null {
  if (!arms.every(({ channel }) => isEqualDuct(channel, arms[0].channel))) return null;
  const [first, ...rest] = arms;
  const sorted = [...rest].sort((p, q) => angleBetween(first, q) - angleBetween(first, p));
  const [opposite, left, right] = sorted;
  if (Math.PI - angleBetween(first, opposite) > ANGLE_TOLERANCE_RAD) return null;
  if (Math.PI - angleBetween(left, right) > ANGLE_TOLERANCE_RAD) return null;
  if (Math.abs(angleBetween(first, left) - Math.PI / 2) > ANGLE_TOLERANCE_RAD) return null;
  const width = first.channel.ductWidthMm;
  const { arm: k, bound, error } = crossK(width / first.channel.depthMm);
  return {
    kind: 'cross of equal ducts',
    trimming: TRIM_NOTHING,
    // A passage has two arms. With two opposite arms in and two out the star is off by three times what it is off by
    // straight on or round a corner (the cross has two constants, straight and turn; the star one).
    parts: arms.map((arm) => toPart(arm, k, 1.5 * bound + error, width)),
  };
}
