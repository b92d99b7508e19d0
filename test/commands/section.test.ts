import { describe, expect, it } from 'vitest';
import { run } from '../../src/cli.ts';
import { fakeIo } from './fake-io.ts';

async function section(...args: string[]) {
  const io = fakeIo('/');
  const code = await run(['section', ...args], io);
  return { code, out: io.stdout(), err: io.stderr() };
}

const SIZE = ['--width', '500 um', '--depth', '50 um', '--length', '20 mm'];

describe('rillcheck section', () => {
  it('finds the same state from its flow, its pressure and its mean wall shear', async () => {
    const read = async (...given: string[]) => JSON.parse((await section(...SIZE, ...given, '--json')).out);
    const byFlow = await read('--flow', '10 uL/min');
    for (const [option, key, unit] of [
      ['--pressure', 'pressure_drop_pa', 'Pa'],
      ['--wall-shear', 'wall_shear_floor_mean_pa', 'Pa'],
    ]) {
      const other = await read(option, `${byFlow[key]} ${unit}`);
      expect(Math.abs(other.flow_m3_s / byFlow.flow_m3_s - 1)).toBeLessThan(1e-13);
      expect(Math.abs(other.reynolds / byFlow.reynolds - 1)).toBeLessThan(1e-13);
    }
    expect(byFlow.given).toBe('flow');
  });

  it('prints a table for people: what was given, and parallel plates beside', async () => {
    const { code, out, err } = await section(...SIZE, '--flow', '10 uL/min');
    expect(err).toBe('');
    expect(code).toBe(0);
    expect(out).toMatch(/^duct 500 µm wide, 50 µm deep, 20 mm long\nwater at 25 °C: viscosity 0\.89 mPa s/);
    expect(out).toMatch(/flow +10 µL\/min {2}given\n/);
    expect(out).toContain('Parallel plates');
    for (const line of out.split('\n')) expect(line.length).toBeLessThanOrEqual(100);
  });

  it('says when the flow may not be laminar, when it develops, and what an isotropic etch is computed as', async () => {
    const fast = await section(
      '--width',
      '1 mm',
      '--depth',
      '1 mm',
      '--length',
      '5 mm',
      '--flow',
      '200 mL/min',
    );
    expect(fast.out).toContain('Above a Reynolds number of 1000');
    expect(fast.out).toContain('develops over more than a tenth');
    const etched = await section(...SIZE, '--flow', '1 uL/min', '--profile', 'isotropic');
    expect(etched.out.replace(/\s+/g, ' ')).toContain('578.5 µm wide');
  });

  it.each([
    [[...SIZE], 'section: needs exactly one of --flow, --pressure and --wall-shear (none is given)'],
    [
      [...SIZE, '--flow', '1 uL/min', '--pressure', '1 kPa'],
      'needs exactly one of --flow, --pressure and --wall-shear (--flow and --pressure are given)',
    ],
    [
      ['--width', '500', ...SIZE.slice(2), '--flow', '1 uL/min'],
      '--width: "500" has no unit; write for example "500 um"',
    ],
    [['--width', '-5 um', ...SIZE.slice(2), '--flow', '1 uL/min'], '--width: "-5 um" is not above 0'],
    [[...SIZE, '--flow', '1 kPa'], '--flow: "1 kPa" is a pressure; a flow is needed'],
    [[...SIZE, '--flow', '1 uL/min', '--viscosity', '1 mPa s'], '--density: is needed with --viscosity'],
    [[...SIZE, '--flow', '1 uL/min', '--density', '1 g/mL'], '--viscosity: is needed with --density'],
    [[...SIZE, '--flow', '1 uL/min', '--temperature', '200 degC'], '--temperature: '],
    [
      [
        ...SIZE,
        '--flow',
        '1 uL/min',
        '--viscosity',
        '1 mPa s',
        '--density',
        '1 g/mL',
        '--temperature',
        '30 degC',
      ],
      '--temperature: says nothing about a fluid given by viscosity and density',
    ],
    [SIZE.slice(2), "required option '--width <LENGTH>' not specified"],
  ])('ends 2 with one line for %j', async (args, message) => {
    const { code, out, err } = await section(...args);
    expect({ code, out }).toEqual({ code: 2, out: '' });
    expect(err).toContain(message);
    expect(err.trimEnd()).not.toContain('\n');
  });

  it('runs the examples of its help', async () => {
    const help = await section('--help');
    const examples = help.out.split('\n').filter((line) => line.startsWith('  rillcheck section'));
    expect(examples.length).toBeGreaterThanOrEqual(3);
    for (const example of examples) {
      const words = [...example.matchAll(/"([^"]*)"|(\S+)/g)]
        .map(([, quoted, plain]) => quoted ?? plain)
        .slice(2);
      expect((await section(...words)).code).toBe(0);
    }
  });
});
