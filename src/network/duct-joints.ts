import type { Chip } from '../chip/types.ts';
import { bendK, MITRE_MAX_TURN_RAD, mitreK, shallowMitreK } from '../physics/joints.ts';
import type { Chains } from './chains.ts';
import { APART_WIDTHS } from './computed-joints.ts';
import type { Draft } from './draft.ts';
import type { JointTally } from './joint-types.ts';
import type { Reaches } from './reaches.ts';
import { ANGLE_TOLERANCE_RAD, turnBetween } from './turns.ts';
import type { Network } from './types.ts';

/** The last computed radius of a bend, in widths. */
const TIGHTEST_BEND_WIDTHS = 1;

/** Signed length that joints add to each reach, and its bound, mm. */
export type ReachJoints = Pick<Network, 'reachJointMm' | 'reachJointBoundMm'>;

/**
 * Rule 8, `joints: resolved`, inside runs of equal duct: mitred corners by their turn, bends by radius and angle (chords of
 * one curve are a bend, not corners). Where two corners are nearer than 1.98 widths, or the turn is beyond 120°, or a bend
 * tighter than its width, nothing was computed: nothing is added and the bound says what that could be worth.
 *
 * Cost: linear in the segments.
 */
export function addDuctJoints(draft: Draft, reaches: Reaches, runs: Chains, tally: JointTally): ReachJoints {
  const joints = {
    reachJointMm: new Float64Array(reaches.reachCount),
    reachJointBoundMm: new Float64Array(reaches.reachCount),
  };
  const run = new Run();
  const adding: Adding = { run, joints, tally };
  for (let n = 0; n < runs.count; n++) {
    run.set(draft.chip, reaches, runs, n);
    if (Number.isNaN(run.aspect)) continue;
    addCorners(adding, draft.slackMm);
    addBends(adding);
  }
  return joints;
}

/** The segments of one run in its own direction, k = 0 … count − 1. One object serves all runs. */
class Run {
  count = 0;
  width = Number.NaN;
  /** Width over depth; NaN where the depth is not known. */
  aspect = Number.NaN;
  isLoop = false;
  readonly reach: number[] = [];
  /** First point and vector, mm. */
  readonly x: number[] = [];
  readonly y: number[] = [];
  readonly dx: number[] = [];
  readonly dy: number[] = [];
  readonly radius: number[] = [];

  set(chip: Chip, reaches: Reaches, { first, side, isLoop }: Chains, n: number): void {
    const { firstSegment, reachChannel } = reaches;
    const { ductWidthMm, depthMm } = chip.channels[reachChannel[side[first[n]] >> 1]];
    this.width = ductWidthMm;
    this.aspect = ductWidthMm / depthMm;
    this.isLoop = isLoop[n] === 1;
    this.count = 0;
    for (let k = first[n]; k < first[n + 1]; k++) {
      const begin = firstSegment[side[k] >> 1];
      const end = firstSegment[(side[k] >> 1) + 1];
      if ((side[k] & 1) === 0) for (let s = begin; s < end; s++) this.add(reaches, s, true);
      else for (let s = end - 1; s >= begin; s--) this.add(reaches, s, false);
    }
  }

  private add(reaches: Reaches, s: number, forward: boolean): void {
    const { segmentX1: x1, segmentY1: y1, segmentX2: x2, segmentY2: y2 } = reaches;
    const k = this.count++;
    this.reach[k] = reaches.segmentReach[s];
    this.x[k] = forward ? x1[s] : x2[s];
    this.y[k] = forward ? y1[s] : y2[s];
    this.dx[k] = forward ? x2[s] - x1[s] : x1[s] - x2[s];
    this.dy[k] = forward ? y2[s] - y1[s] : y1[s] - y2[s];
    this.radius[k] = reaches.segmentBendRadiusMm[s];
  }

  /** Drawn length, mm. */
  length(k: number): number {
    return Math.hypot(this.dx[k], this.dy[k]);
  }

  /** Turn from segment k to the next, rad. */
  turn(k: number): number {
    const { dx, dy, radius } = this;
    return turnBetween(dx[k], dy[k], radius[k], dx[k + 1], dy[k + 1], radius[k + 1]);
  }
}

/** The run whose joints are looked for, and where they are added. */
interface Adding {
  readonly run: Run;
  readonly joints: ReachJoints;
  readonly tally: JointTally;
}

function addCorners(adding: Adding, slackMm: number): void {
  const { run, joints } = adding;
  const { width, count, isLoop } = run;
  // A bend is a joint too, where it turns by more than the tolerance over the room that a corner needs. It has no meeting
  // point; it begins where a mitre's square would: half a width before.
  const isTight = (radius: number): boolean =>
    radius > 0 && (APART_WIDTHS - 0.5) * width > ANGLE_TOLERANCE_RAD * radius;
  let sinceJoint = 0;
  /** Corner that waits for the distance to the next joint: its turn, the distance behind it and the segment before it. */
  let waiting: { turn: number; behind: number; k: number } | null = null;
  const settle = (ahead: number): void => {
    if (waiting === null) return;
    addCorner(adding, waiting.k, waiting.turn, Math.min(waiting.behind, ahead));
    waiting = null;
  };
  if (isLoop) sinceJoint = Number.POSITIVE_INFINITY;
  for (let k = 0; k + 1 < count; k++) {
    if (isTight(run.radius[k])) {
      settle(sinceJoint + width / 2);
      sinceJoint = width / 2;
    } else {
      sinceJoint += run.length(k);
    }
    const turn = run.turn(k);
    if (turn <= 1e-6) continue;
    // Needs no room and is not listed: its k is below 0.001.
    if (turn <= ANGLE_TOLERANCE_RAD) {
      addAt(run, joints.reachJointMm, k, mitreK(run.aspect, turn).k * width);
      continue;
    }
    // A vertex within the slack of the run's end is the node there, drawn a hair off.
    if (waiting === null && sinceJoint <= slackMm) continue;
    settle(sinceJoint);
    waiting = { turn, behind: sinceJoint, k };
    sinceJoint = 0;
  }
  if (isLoop) {
    settle(Number.POSITIVE_INFINITY);
    return;
  }
  if (count === 0) return;
  const rest = sinceJoint + (isTight(run.radius[count - 1]) ? width / 2 : run.length(count - 1));
  if (rest > slackMm) settle(rest);
}

/** Adds to the reach of a corner between segment k and the next; at a seam half to either. */
function addAt(run: Run, into: Float64Array, k: number, value: number): void {
  into[run.reach[k]] += value / 2;
  into[run.reach[k + 1]] += value / 2;
}

function addCorner({ run, joints, tally }: Adding, at: number, turn: number, room: number): void {
  const { width, aspect } = run;
  const [x, y] = [run.x[at + 1], run.y[at + 1]];
  const isComputed = turn <= MITRE_MAX_TURN_RAD + 1e-9;
  const { k, error } = mitreK(aspect, Math.min(turn, MITRE_MAX_TURN_RAD));
  if (isComputed && room >= APART_WIDTHS * width - 1e-6) {
    addAt(run, joints.reachJointMm, at, k * width);
    addAt(run, joints.reachJointBoundMm, at, error * width);
    tally.add('mitred corner', k * width, error * width, x, y);
    return;
  }
  // Two corners close together turn the flow less than two by themselves. Beyond 120° the correction grows with the overlap
  // of the legs, most in the shallow limit, up to all that there is of the shorter one on either leg.
  const beyond = isComputed ? 0 : Math.min(Math.abs(shallowMitreK(turn)) * width, 2 * room);
  const bound = Math.max((Math.abs(k) + error) * width, beyond);
  addAt(run, joints.reachJointBoundMm, at, bound);
  tally.add('corner not computed', 0, bound, x, y);
}

function addBends(adding: Adding): void {
  const { run } = adding;
  for (let k = 0; k < run.count; ) {
    const next = run.radius[k] === 0 ? k + 1 : endOfBend(run, k);
    if (run.radius[k] > 0) addBend(adding, k, next);
    k = next;
  }
}

/** First segment after the chords from k on that all turn the same way. */
function endOfBend(run: Run, k: number): number {
  let side = 0;
  let next = k + 1;
  for (; next < run.count && run.radius[next] > 0; next++) {
    const turn = turnSide(run, next - 1);
    if (side !== 0 && turn !== 0 && turn !== side) break;
    if (turn !== 0) side = turn;
  }
  return next;
}

function addBend({ run, joints, tally }: Adding, from: number, to: number): void {
  const { width, aspect } = run;
  let angle = 0;
  let tightest = Number.POSITIVE_INFINITY;
  for (let k = from; k < to; k++) {
    angle += chordAngle(run, k);
    tightest = Math.min(tightest, run.radius[k] / width);
  }
  const isComputed = tightest >= TIGHTEST_BEND_WIDTHS * (1 - 1e-6);
  // Tighter than its width: at worst it is a mitred corner of the same turn.
  const mitre = mitreK(aspect, Math.min(angle, MITRE_MAX_TURN_RAD));
  const bound = (isComputed ? bendK(aspect, tightest, angle).error : Math.abs(mitre.k) + mitre.error) * width;
  let added = 0;
  for (let k = from; k < to; k++) {
    const share = chordAngle(run, k);
    joints.reachJointBoundMm[run.reach[k]] += (bound * share) / angle;
    if (!isComputed) continue;
    const length = bendK(aspect, Math.max(run.radius[k] / width, TIGHTEST_BEND_WIDTHS), share).k * width;
    joints.reachJointMm[run.reach[k]] += length;
    added += length;
  }
  tally.add(isComputed ? 'bend' : 'bend not computed', added, bound, run.x[from], run.y[from]);
}

/** The angle of the curve that a chord was cut from. */
function chordAngle(run: Run, k: number): number {
  return 2 * Math.asin(Math.min(1, run.length(k) / (2 * run.radius[k])));
}

/** Which way the curve turns after this segment: +1 or −1, 0 for straight on. */
function turnSide(run: Run, k: number): number {
  return Math.sign(run.dx[k] * run.dy[k + 1] - run.dy[k] * run.dx[k + 1]);
}
