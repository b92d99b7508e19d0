import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { checkLayout, type LayoutFiles } from '../../src/check-layout.ts';

const text = (name: string): string => readFileSync(`layouts-demo/${name}`, 'utf8');
const files: LayoutFiles = {
  layout: { name: 'culture.svg', text: text('culture.svg') },
  runSheet: { name: 'culture.run.yaml', text: text('culture.run.yaml') },
};

describe('checkLayout', () => {
  it('hashes the texts where the caller has no hash of the files, and takes the caller’s where it has', async () => {
    const hash = (of: string): string => createHash('sha256').update(of).digest('hex');
    const { result } = await checkLayout(files);
    expect(result.layout.sha256).toBe(hash(files.layout.text));
    expect(result.run_sheet?.sha256).toBe(hash(text('culture.run.yaml')));
    const own = await checkLayout({ layout: { ...files.layout, sha256: 'f'.repeat(64) }, runSheet: null });
    expect([own.result.layout.sha256, own.result.run_sheet]).toEqual(['f'.repeat(64), null]);
  });

  it('takes every case, or the one asked for, and tells its stages', async () => {
    const stages: string[] = [];
    const both = await checkLayout(files, {
      onStage: async (stage, name) => {
        stages.push(`${name}: ${stage}`);
      },
    });
    expect(both.cases.map(({ name }) => name)).toEqual(['seed', 'culture']);
    expect(stages).toContain('culture: checking rules');
    expect((await checkLayout(files, { case: 'culture' })).cases.map(({ name }) => name)).toEqual([
      'culture',
    ]);
    await expect(checkLayout(files, { case: 'cultures' })).rejects.toThrow('did you mean "culture"?');
  });

  it('ends the pace of each case’s draws before the next stage, also when they fail', async () => {
    const told: string[] = [];
    const paceOf = (name: string | null) => ({
      due: () => false,
      rest: async () => 'go on' as const,
      end: () => told.push(`${name} ended`),
    });
    const onStage = async (stage: string, name: string | null): Promise<void> => {
      if (stage === 'joining channels') told.push(`${name} begins`);
    };
    const report = await checkLayout(files, { spread: { draws: 4, seed: 1, paceOf }, onStage });
    expect(told).toEqual(['seed begins', 'seed ended', 'culture begins', 'culture ended']);
    expect(report.cases.map(({ spread }) => spread?.draws)).toEqual([4, 4]);
    told.length = 0;
    const failing = (name: string | null) => ({
      ...paceOf(name),
      due: () => {
        throw new Error('no time');
      },
    });
    await expect(
      checkLayout(files, { spread: { draws: 4, seed: 1, paceOf: failing }, onStage }),
    ).rejects.toThrow('no time');
    expect(told).toEqual(['seed begins', 'seed ended']);
  });

  it('says what is not asked properly', async () => {
    const bare = { ...files, runSheet: null };
    await expect(checkLayout(bare, { pump: true })).rejects.toThrow('culture.svg: targets: there are none');
    await expect(checkLayout(bare, { spread: { draws: 4, seed: 1 } })).rejects.toThrow(
      'tolerances: there are none',
    );
  });
});
