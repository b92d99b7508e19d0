import type { Chip } from '../chip/types.ts';
import { bendK, MITRE_MAX_TURN_RAD, mitreK, shallowMitreK } from '../physics/joints.ts';
import type { JointTally } from './joint-types.ts';
import { ANGLE_TOLERANCE_RAD, APART_WIDTHS, turnBetween } from './node-joints.ts';
import type { Reaches } from './reaches.ts';

/** The last computed radius of a bend, in widths. */
const TIGHTEST_BEND_WIDTHS = 1;

/** Signed length and bound that corners and bends add to each reach, mm. */
export interface DuctJoints {
  readonly reachMm: Float64Array;
  readonly reachBoundMm: Float64Array;
}

/**
 * Rule 8, `joints: resolved`, inside reaches: mitred corners by their turn, bends by radius and angle (chords of one curve
 * are a bend, not corners). Where two corners are nearer than 1.98 widths, or the turn is beyond 120°, or a bend tighter
 * than its width, nothing was computed: nothing is added and the bound says what that could be worth.
 *
 * Cost: linear in the segments.
 */
export function addDuctJoints(chip: Chip, reaches: Reaches, tally: JointTally): DuctJoints {
  const joints = { reachMm: new Float64Array(reaches.count), reachBoundMm: new Float64Array(reaches.count) };
  for (let r = 0; r < reaches.count; r++) {
    const channel = chip.channels[reaches.channel[r]];
    if (Number.isNaN(channel.depthMm)) continue;
    addCorners(
      reaches,
      joints,
      tally,
      r,
      channel.ductWidthMm,
      channel.ductWidthMm / channel.depthMm,
      chip.joinWithinMm,
    );
    addBends(reaches, joints, tally, r, channel.ductWidthMm, channel.ductWidthMm / channel.depthMm);
  }
  return joints;
}

function addCorners(
  reaches: Reaches,
  joints: DuctJoints,
  tally: JointTally,
  r: number,
  width: number,
  aspect: number,
  slackMm: number,
): void {
  const { segments } = reaches;
  const begin = reaches.firstSegment[r];
  const end = reaches.firstSegment[r + 1];
  const isLoop = reaches.from[r] === reaches.to[r] && isThroughLoop(reaches, r);
  const turnAt = (segment: number, next: number): number =>
    turnBetween(
      segments.x2[segment] - segments.x1[segment],
      segments.y2[segment] - segments.y1[segment],
      segments.bendRadius[segment],
      segments.x2[next] - segments.x1[next],
      segments.y2[next] - segments.y1[next],
      segments.bendRadius[next],
    );
  // A bend is a joint too, where it turns by more than the tolerance over the room that a corner needs. It has no meeting
  // point; it begins where a mitre's square would: half a width before.
  const isTight = (radius: number): boolean =>
    radius > 0 && (APART_WIDTHS - 0.5) * width > ANGLE_TOLERANCE_RAD * radius;
  let sinceJoint = 0;
  /** Corner that waits for the distance to the next joint: its turn, the distance behind it and its place. */
  let waiting: { turn: number; behind: number; segment: number } | null = null;
  const settle = (ahead: number): void => {
    if (waiting === null) return;
    addCorner(
      joints,
      tally,
      r,
      width,
      aspect,
      waiting.turn,
      Math.min(waiting.behind, ahead),
      segments.x2[waiting.segment],
      segments.y2[waiting.segment],
    );
    waiting = null;
  };
  if (isLoop) sinceJoint = Number.POSITIVE_INFINITY;
  for (let s = begin; s + 1 < end; s++) {
    if (isTight(segments.bendRadius[s])) {
      settle(sinceJoint + width / 2);
      sinceJoint = width / 2;
    } else {
      sinceJoint += segmentLength(reaches, s);
    }
    const turn = turnAt(s, s + 1);
    if (turn <= 1e-6) continue;
    // Needs no room and is not listed: its k is below 0.001.
    if (turn <= ANGLE_TOLERANCE_RAD) {
      joints.reachMm[r] += mitreK(aspect, turn).k * width;
      continue;
    }
    // A vertex within the slack of the reach's end is the node there, drawn a hair off.
    if (waiting === null && sinceJoint <= slackMm) continue;
    settle(sinceJoint);
    waiting = { turn, behind: sinceJoint, segment: s };
    sinceJoint = 0;
  }
  if (isLoop) {
    settle(Number.POSITIVE_INFINITY);
    return;
  }
  if (end === begin) return;
  const rest =
    sinceJoint + (isTight(segments.bendRadius[end - 1]) ? width / 2 : segmentLength(reaches, end - 1));
  if (rest > slackMm) settle(rest);
}

/** A closed channel that no node interrupts. */
function isThroughLoop(reaches: Reaches, r: number): boolean {
  const { segments } = reaches;
  const last = reaches.firstSegment[r + 1] - 1;
  const first = reaches.firstSegment[r];
  return segments.x2[last] === segments.x1[first] && segments.y2[last] === segments.y1[first];
}

function addCorner(
  joints: DuctJoints,
  tally: JointTally,
  r: number,
  width: number,
  aspect: number,
  turn: number,
  room: number,
  x: number,
  y: number,
): void {
  const isComputed = turn <= MITRE_MAX_TURN_RAD + 1e-9;
  const { k, error } = mitreK(aspect, Math.min(turn, MITRE_MAX_TURN_RAD));
  if (isComputed && room >= APART_WIDTHS * width - 1e-6) {
    joints.reachMm[r] += k * width;
    joints.reachBoundMm[r] += error * width;
    tally.add('mitred corner', k * width, error * width, x, y);
    return;
  }
  // Two corners close together turn the flow less than two by themselves. Beyond 120° the correction grows with the overlap
  // of the legs, most in the shallow limit, up to all that there is of the shorter one on either leg.
  const beyond = isComputed ? 0 : Math.min(Math.abs(shallowMitreK(turn)) * width, 2 * room);
  const bound = Math.max((Math.abs(k) + error) * width, beyond);
  joints.reachBoundMm[r] += bound;
  tally.add('corner not computed', 0, bound, x, y);
}

function addBends(
  reaches: Reaches,
  joints: DuctJoints,
  tally: JointTally,
  r: number,
  width: number,
  aspect: number,
): void {
  const { segments } = reaches;
  const end = reaches.firstSegment[r + 1];
  for (let s = reaches.firstSegment[r]; s < end; ) {
    const next = segments.bendRadius[s] === 0 ? s + 1 : endOfBend(reaches, s, end);
    if (segments.bendRadius[s] > 0) addBend(reaches, joints, tally, r, width, aspect, s, next);
    s = next;
  }
}

/** First segment after the run of chords from s on that all turn the same way. */
function endOfBend(reaches: Reaches, s: number, end: number): number {
  const { bendRadius } = reaches.segments;
  let side = 0;
  let next = s + 1;
  for (; next < end && bendRadius[next] > 0; next++) {
    const turn = turnSide(reaches, next - 1);
    if (side !== 0 && turn !== 0 && turn !== side) break;
    if (turn !== 0) side = turn;
  }
  return next;
}

function addBend(
  reaches: Reaches,
  joints: DuctJoints,
  tally: JointTally,
  r: number,
  width: number,
  aspect: number,
  from: number,
  to: number,
): void {
  const { segments } = reaches;
  let angle = 0;
  let added = 0;
  let tightest = Number.POSITIVE_INFINITY;
  for (let s = from; s < to; s++) {
    const radius = segments.bendRadius[s];
    const chordAngle = 2 * Math.asin(Math.min(1, segmentLength(reaches, s) / (2 * radius)));
    angle += chordAngle;
    tightest = Math.min(tightest, radius / width);
    added += bendK(aspect, Math.max(radius / width, TIGHTEST_BEND_WIDTHS), chordAngle).k * width;
  }
  const [x, y] = [segments.x1[from], segments.y1[from]];
  if (tightest >= TIGHTEST_BEND_WIDTHS * (1 - 1e-6)) {
    const bound = bendK(aspect, tightest, angle).error * width;
    joints.reachMm[r] += added;
    joints.reachBoundMm[r] += bound;
    tally.add('bend', added, bound, x, y);
    return;
  }
  // Tighter than its width: at worst it is a mitred corner of the same turn.
  const { k, error } = mitreK(aspect, Math.min(angle, MITRE_MAX_TURN_RAD));
  const bound = (Math.abs(k) + error) * width;
  joints.reachBoundMm[r] += bound;
  tally.add('bend not computed', 0, bound, x, y);
}

/** Which way the curve turns after this segment: +1 or −1, 0 for straight on. */
function turnSide(reaches: Reaches, s: number): number {
  const { segments } = reaches;
  const cross =
    (segments.x2[s] - segments.x1[s]) * (segments.y2[s + 1] - segments.y1[s + 1]) -
    (segments.y2[s] - segments.y1[s]) * (segments.x2[s + 1] - segments.x1[s + 1]);
  return Math.sign(cross);
}

function segmentLength(reaches: Reaches, s: number): number {
  const { segments } = reaches;
  return Math.hypot(segments.x2[s] - segments.x1[s], segments.y2[s] - segments.y1[s]);
}
