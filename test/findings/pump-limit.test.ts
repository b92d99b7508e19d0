import { describe, expect, it } from 'vitest';
import { drawing } from '../solve/network-from.ts';
import { findingsOf } from './findings-of.ts';

const SVG = drawing({ lane: 'M5 10H50' }, { in: [5, 10], out: [50, 10] });

function pumpFindings(inlet: string, limits: string) {
  const report = findingsOf(
    SVG,
    `depth: 100 um\nports:\n  in: ${inlet}\n  out: open\n${limits === '' ? '' : `pump_limits: { in: ${limits} }\n`}`,
  );
  return {
    findings: report.findings.filter(({ rule }) => rule === 'pump-limit'),
    notRun: report.notRun.filter(({ rule }) => rule === 'pump-limit'),
  };
}

describe('pump-limit', () => {
  it('blocks a pressure, an underpressure and a flow beyond what the pump of the port can do', () => {
    const [high] = pumpFindings('{ pressure: 3 kPa }', '{ max_pressure: 2 kPa }').findings;
    expect(high).toMatchObject({
      severity: 'blocker',
      measured: 3000,
      limit: 2000,
      unit: 'Pa',
      names: ['in'],
    });
    const [low] = pumpFindings('{ pressure: -3 kPa }', '{ min_pressure: -2 kPa }').findings;
    expect(low).toMatchObject({ measured: -3000, limit: -2000, unit: 'Pa' });
    const [fast] = pumpFindings('{ flow: -30 uL/min }', '{ max_flow: 20 uL/min }').findings;
    expect(fast).toMatchObject({ limit: 20e-9 / 60, unit: 'm³/s' });
    expect(fast.measured).toBeCloseTo(30e-9 / 60, 20);
    expect(fast.message).toContain('draw 30 µL/min, more than the 20 µL/min that it can');
  });

  it('lets a pump draw as much as it may give', () => {
    expect(pumpFindings('{ flow: -19 uL/min }', '{ max_flow: 20 uL/min }').findings).toEqual([]);
  });

  it('looks at the pressure at the far end of the tubing, which a syringe pump must push against', () => {
    const tubing = 'tubing: { bore: 0.1 mm, length: 500 mm }';
    const free = pumpFindings('{ flow: 20 uL/min }', '{ max_pressure: 20 kPa }');
    expect(free.findings).toEqual([]);
    const [stalled] = pumpFindings(`{ flow: 20 uL/min, ${tubing} }`, '{ max_pressure: 20 kPa }').findings;
    expect(stalled.measured).toBeGreaterThan(20e3);
  });

  it('takes a setting at its limit for one within it', () => {
    expect(
      pumpFindings('{ pressure: 2 kPa }', '{ max_pressure: 2 kPa, max_flow: 1 L/min }').findings,
    ).toEqual([]);
  });

  it('is not run without pump_limits, nor where the pressure is not known', () => {
    expect(pumpFindings('open', '').notRun).toEqual([
      { rule: 'pump-limit', why: 'no pump_limits are given' },
    ]);
    const report = findingsOf(
      SVG,
      'depth: 100 um\nports: { in: { flow: 1 uL/min }, out: { flow: -1 uL/min } }\npump_limits: { in: { max_pressure: 1 kPa } }\n',
    );
    expect(report.notRun).toContainEqual({
      rule: 'pump-limit',
      why: 'the pressure or flow of in is not known',
    });
  });
});
