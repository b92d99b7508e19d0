import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { findAll } from '../../src/findings/check.ts';
import { expectCutsToBeNamed, isSpokenOf, portsWithoutAWay } from './cut-chip-checks.ts';
import { contextOf } from './findings-of.ts';

const FOLDERS = ['./fixtures', '../../layouts-demo', '../corpus/fixtures'].map(
  (folder) => new URL(folder, import.meta.url).pathname,
);

describe('dead-port', () => {
  it('speaks of every driven or open port without a way to another, in every fixture, demo and corpus drawing', () => {
    let ports = 0;
    for (const folder of FOLDERS) {
      for (const file of readdirSync(folder, { recursive: true, encoding: 'utf8' })) {
        const stem = join(folder, file.replace(/\.svg$/, ''));
        if (!file.endsWith('.svg') || !existsSync(`${stem}.run.yaml`)) continue;
        const context = contextOf(
          readFileSync(`${stem}.svg`, 'utf8'),
          readFileSync(`${stem}.run.yaml`, 'utf8'),
        );
        const { findings } = findAll(context);
        // Where an outline leads, that nothing is joined follows from the outline.
        if (findings.some(({ rule }) => rule === 'filled-outline')) continue;
        for (const port of portsWithoutAWay(context)) {
          ports++;
          expect(isSpokenOf(findings, port), `${file}: ${port}`).toBe(true);
        }
      }
    }
    expect(ports).toBeGreaterThan(10);
  });

  it('is silent on whole chips, and never lets a cut pass in silence', () => {
    expectCutsToBeNamed(1, 40);
  });
});
