import { grouped } from '../by-key.ts';
import type { Obstacle } from '../chip/types.ts';
import type { Place } from './closest.ts';
import type { FindingContext } from './context.ts';
import { type Rule, rule, toFinding } from './rule.ts';
import type { Finding } from './types.ts';
import { countText, listText } from './words.ts';

/** Drawn areas in a channel that are no ports: the model knows nothing of them. */
export const obstacleRules: readonly Rule[] = [rule('obstacle', obstacles)];

/** One finding per channel for what stands in it, and one for what lies across its walls. */
function obstacles({ chip }: FindingContext): Finding[] {
  const groups = grouped(chip.obstacles, ({ channel, inside }) => `${channel} ${inside}`);
  return [...groups.values()].map((group) => {
    const [first] = group;
    const { name } = chip.channels[first.channel];
    const who = whoText(group);
    const one = group.length === 1;
    const message = first.inside
      ? `${who} ${one ? 'stands' : 'stand'} in ${name} and ${one ? 'is no port' : 'are no ports'}: the pressures, flows and wall shears given are those of the empty channel`
      : `${who} ${one ? 'lies' : 'lie'} across a wall of ${name} and ${one ? 'is neither channel nor port' : 'are neither channels nor ports'}: whether ${name} is wider or narrower there is not in the model`;
    const it = one ? 'it' : 'them';
    return toFinding('obstacle', 'caution', {
      message,
      fix: first.inside
        ? `expect a higher pressure drop and wall shear in ${name} than computed if ${one ? 'it is a pillar' : 'they are pillars'}; if ${one ? 'it is a port' : 'they are ports'}, see ports_layer: and limits: port_diameter in the run sheet; if ${one ? 'it is' : 'they are'} not on the chip, name ${it} or the layer under ignore:`
        : `draw what ${one ? 'it adds' : 'they add'} to ${name} as a stroke along its middle, or name ${it} or the layer under ignore: in the run sheet if ${one ? 'it is' : 'they are'} not on the chip`,
      at: middleOf(first),
      names: [name],
    });
  });
}

function whoText(group: readonly Obstacle[]): string {
  const isNamed = group.every(({ name }) => !name.startsWith('unnamed '));
  const circles = group.every(({ circle }) => circle !== null);
  const what = countText(group.length, circles ? 'drawn circle' : 'drawn shape');
  return isNamed ? `${what} (${listText(group.map(({ name }) => name))})` : what;
}

function middleOf({ circle, rings }: Obstacle): Place {
  if (circle !== null) return circle;
  const [ring] = rings;
  let [x, y] = [0, 0];
  const corners = ring.length / 2 - 1;
  for (let k = 0; k < corners; k++) {
    x += ring[2 * k];
    y += ring[2 * k + 1];
  }
  return { xMm: x / corners, yMm: y / corners };
}
