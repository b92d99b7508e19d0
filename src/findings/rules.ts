import { cornerRules } from './corners.ts';
import { edgeRules } from './edge.ts';
import { endRules } from './ends.ts';
import { flowRules } from './flow.ts';
import { levelRules } from './level-sensitive.ts';
import { networkRules } from './network.ts';
import { notComputedRules } from './not-computed.ts';
import { portRules } from './ports.ts';
import { pressureRules } from './pressure.ts';
import { pumpRules } from './pump-limit.ts';
import { readingRules } from './reading.ts';
import { regimeRules } from './regime.ts';
import type { Rule } from './rule.ts';
import { sectionRules } from './section.ts';
import { strokeRules } from './strokes.ts';
import { unevenRules } from './uneven.ts';
import { wallRules } from './walls.ts';
import { windowRules } from './windows.ts';

/** Every rule, family by family. A new family is one file and one line here. */
export const RULES: readonly Rule[] = [
  ...readingRules,
  ...notComputedRules,
  ...wallRules,
  ...strokeRules,
  ...endRules,
  ...portRules,
  ...edgeRules,
  ...cornerRules,
  ...sectionRules,
  ...networkRules,
  ...pressureRules,
  ...pumpRules,
  ...windowRules,
  ...unevenRules,
  ...levelRules,
  ...flowRules,
  ...regimeRules,
];
