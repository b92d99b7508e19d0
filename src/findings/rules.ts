import { flowRules } from './flow.ts';
import { networkRules } from './network.ts';
import { pressureRules } from './pressure.ts';
import { readingRules } from './reading.ts';
import { regimeRules } from './regime.ts';
import type { Rule } from './rule.ts';
import { sectionRules } from './section.ts';
import { windowRules } from './windows.ts';

/** Every rule, family by family. A new family is one file and one line here. */
export const RULES: readonly Rule[] = [
  ...readingRules,
  ...sectionRules,
  ...networkRules,
  ...pressureRules,
  ...windowRules,
  ...flowRules,
  ...regimeRules,
];
