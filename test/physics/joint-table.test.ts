import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import * as table from '../../src/physics/joint-table.ts';

/** Rows of test/published/joints.csv (its source is named in joints.test.ts there): case,variant,aspect,k,uncertainty. */
const published = readFileSync(new URL('../published/joints.csv', import.meta.url), 'utf8')
  .trim()
  .split('\n')
  .map((line) => line.split(','));
const rowOf = (name: string): number[] =>
  published.flatMap(([joint, variant, , k]) => (`${joint},${variant}` === name ? [Number(k)] : []));

const STRAIGHT = 'main_straight_branch_closed(unit w*r_W)';
const ROWS: readonly (readonly [string, table.JointRow])[] = [
  ['1_mitre_90,total', table.MITRE_90],
  ['2_mitre_45,total', table.MITRE_45],
  ['4_arc_90,R=1w', table.ARC_RADIUS_1],
  ['4_arc_90,R=2w', table.ARC_RADIUS_2],
  ['5_T_equal,straight_side_closed', table.TEE_STRAIGHT],
  ['5_T_equal,symmetric_split_centre', table.TEE_SYMMETRIC],
  ...table.WIDTH_RATIOS.flatMap((ratio, i): (readonly [string, table.JointRow])[] => [
    [`6_T_narrow_into_W=${ratio}w,symmetric_to_wall`, table.TEE_WIDE_TO_WALL[i]],
    [`6_T_narrow_into_W=${ratio}w,${STRAIGHT}`, table.TEE_WIDE_STRAIGHT[i]],
    [`7_step_w_to_${ratio}w,total`, table.STEP[i]],
  ]),
  ['9_X_equal,straight_sides_closed', table.CROSS_STRAIGHT],
  ['9_X_equal,turn_90_others_closed', table.CROSS_TURN],
];

it.each(ROWS)('the table of %s is the published row, number by number', (name, row) => {
  const wanted = rowOf(name);
  expect(wanted.length).toBe(table.JOINT_ASPECTS.length);
  row.forEach((k, i) => {
    expect(k, `aspect ${table.JOINT_ASPECTS[i]}`).toBeCloseTo(wanted[i], 6);
  });
});
