import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { describe, expect, it } from 'vitest';

const src = new URL('../../src', import.meta.url).pathname;

/** By file, from src/: the files it names, types included. */
const imports = new Map(
  readdirSync(src, { recursive: true, encoding: 'utf8' })
    .filter((file) => file.endsWith('.ts') && !file.endsWith('.d.ts'))
    .map((file) => [file, namedBy(file)]),
);

function namedBy(file: string): readonly string[] {
  const text = readFileSync(join(src, file), 'utf8');
  return [...text.matchAll(/(?:\bfrom|\bimport|\bimport\()\s*'(\.[^']+)'/g)].map(([, name]) =>
    join(dirname(file), name),
  );
}

/** The shortest way by imports from a file back to itself; empty where there is none. */
function circleOf(file: string): readonly string[] {
  const cameFrom = new Map<string, string>();
  const queue = [file];
  for (const at of queue) {
    for (const next of imports.get(at) ?? []) {
      if (next === file) {
        const way = [file];
        for (let step = at; step !== file; step = cameFrom.get(step)!) way.unshift(step);
        return [file, ...way];
      }
      if (cameFrom.has(next)) continue;
      cameFrom.set(next, at);
      queue.push(next);
    }
  }
  return [];
}

describe('the imports of src/', () => {
  it('name files that are there', () => {
    const missing = [...imports.values()].flat().filter((file) => !imports.has(file));
    expect(missing).toEqual([]);
  });

  it('lead from no file back to itself', () => {
    const circles = [...imports.keys()].map(circleOf).filter(({ length }) => length > 0);
    expect(circles.map((circle) => circle.join(' → '))).toEqual([]);
  });
});
