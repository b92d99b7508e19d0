/** Input made to hurt: each ends within the time and the documented exit codes, with one line that says why. */
import { beforeAll, describe, expect, it } from 'vitest';
import { faultsOf, type Ran, runOn } from './run-on.ts';

const SVG = 'xmlns="http://www.w3.org/2000/svg"';
const RUN = 'depth: 50 um\nports:\n  in: { pressure: 10 kPa }\n  out: open\n';
const CHIP =
  '<path id="run" d="M5 10H60" fill="none" stroke="#000" stroke-width=".2"/><circle id="in" cx="5" cy="10" r="1"/><circle id="out" cx="60" cy="10" r="1"/>';

function drawing(content: string, root = 'width="100mm" height="50mm" viewBox="0 0 100 50"'): string {
  return `<svg ${SVG} ${root}>${content}</svg>`;
}

async function check(svg: string, sheet: string = RUN, ...more: readonly string[]): Promise<Ran> {
  const argv = ['check', 'chip.svg', '--json', '--detail', 'ports', ...more];
  const ran = await runOn({ 'chip.svg': svg, 'chip.run.yaml': sheet }, argv);
  expect(faultsOf(ran, argv)).toEqual([]);
  return ran;
}

async function refusal(svg: string, sheet: string = RUN): Promise<string> {
  const { code, err } = await check(svg, sheet);
  expect(code, err).toBe(2);
  return err.trim();
}

// The first run loads the program, which is not what is timed here.
beforeAll(() => check(drawing(CHIP)), 60_000);

describe('a layout that grows when it is read is refused', () => {
  it('entities made of entities', async () => {
    const levels = Array.from({ length: 9 }, (_, i) => `<!ENTITY a${i + 1} "${`&a${i};`.repeat(10)}">`).join(
      '',
    );
    const bomb = `<!DOCTYPE svg [<!ENTITY a0 "ha">${levels}]>${drawing(`<title>&a9;</title>${CHIP}`)}`;
    expect(await refusal(bomb)).toMatch(/&a9;.*refers to another entity/);
  });

  it('one long entity, many times', async () => {
    const bomb = `<!DOCTYPE svg [<!ENTITY a "${'x'.repeat(10_000)}">]>${drawing(`<title>${'&a;'.repeat(10_000)}</title>`)}`;
    expect(await refusal(bomb)).toMatch(/1000000 characters \(the limit\)/);
  });

  it('an entity that stands for a file is not opened', async () => {
    const text = `<!DOCTYPE svg [<!ENTITY a SYSTEM "file:///etc/passwd">]>${drawing('<title>&a;</title>')}`;
    expect(await refusal(text)).toMatch(/stands for another file/);
  });

  it('copies of copies of copies', async () => {
    const levels = Array.from(
      { length: 9 },
      (_, i) => `<g id="g${i + 1}">${`<use href="#g${i}"/>`.repeat(10)}</g>`,
    ).join('');
    expect(await refusal(drawing(`<defs><g id="g0">${CHIP}</g>${levels}</defs><use href="#g9"/>`))).toMatch(
      /500000 elements that use draws again \(the limit\)/,
    );
  });

  it.each([
    ['<use id="u" href="#u"/>', 'u'],
    ['<g id="a"><use href="#a"/></g>', 'a'],
    ['<g id="a"><use href="#b"/></g><defs><g id="b"><use href="#a"/></g></defs>', 'a'],
  ])('a use that draws itself: %s', async (content, id) => {
    expect(await refusal(drawing(content))).toMatch(`it draws "#${id}", which it is part of`);
  });
});

describe('a run sheet that grows when it is read is refused', () => {
  it('aliases of aliases', async () => {
    const levels = Array.from({ length: 9 }, (_, i) => `a${i + 1}: &a${i + 1} [${`*a${i}, `.repeat(10)}]`);
    expect(await refusal(drawing(CHIP), ['a0: &a0 [x]', ...levels].join('\n'))).toMatch(/alias|anchor/);
  });

  it.each([
    ['brackets', `ignore: ${'['.repeat(100_000)}`],
    ['closed brackets', `ignore: ${'['.repeat(100_000)}${']'.repeat(100_000)}`],
    ['braces', `ports: ${'{a: '.repeat(100_000)}`],
    ['indents', Array.from({ length: 700 }, (_, i) => `${' '.repeat(i)}a:`).join('\n')],
    ['dashes', `ignore:\n  ${'- '.repeat(100_000)}x`],
    ['questions', `${'? '.repeat(100_000)}x`],
  ])('nested %s', async (_, sheet) => {
    await refusal(drawing(CHIP), sheet);
  });

  it('more than 1 MB', async () => {
    expect(await refusal(drawing(CHIP), `# ${'x'.repeat(1_100_000)}`)).toMatch(/larger than .* MB/);
  });
});

describe('a large layout is read or refused by the name of its limit', () => {
  it('100 000 nested groups', async () => {
    const depth = 100_000;
    const { code } = await check(drawing(`${'<g>'.repeat(depth)}${CHIP}${'</g>'.repeat(depth)}`));
    expect(code).toBe(0);
  });

  it('100 000 nested groups with names, each with a channel', async () => {
    const depth = 100_000;
    const groups = Array.from({ length: depth }, (_, i) => `<g id="g${i}"><path d="M0 0h1"/>`).join('');
    expect(await refusal(drawing(`${groups}${'</g>'.repeat(depth)}`))).toMatch(
      /20000000 group names \(the limit\)/,
    );
  });

  it('a path of 30 MB', async () => {
    const path = `M0 0${'l1 1l1-1'.repeat(3_750_000)}`;
    const svg = drawing(`<path d="${path}" fill="none" stroke="#000" stroke-width=".1"/>`);
    expect(svg.length).toBeGreaterThan(30e6);
    expect(await refusal(svg)).toMatch(/more than \d+ (?:path commands|segments) \(the limit\)/);
  }, 60_000);

  it('a path of 30 MB of digits', async () => {
    await check(drawing(`<path d="M0 0H${'1'.repeat(30_000_000)}" stroke="#000"/>`));
  }, 60_000);

  it('over 32 MB', async () => {
    expect(await refusal(drawing(`<!--${'x'.repeat(33_000_000)}-->`))).toMatch(/32 MB|larger than/);
  }, 60_000);

  it('20 000 channels through one point', async () => {
    const lines = Array.from({ length: 20_000 }, (_, i) => {
      const angle = (Math.PI * i) / 20_000;
      const [x, y] = [20 * Math.cos(angle), 20 * Math.sin(angle)];
      return `M${50 - x} ${25 - y}L${50 + x} ${25 + y}`;
    }).join('');
    const star = drawing(`<path d="${lines}" fill="none" stroke="#000" stroke-width=".1"/>`);
    expect(await refusal(star, 'depth: 50 um\n')).toMatch(/more than 20000000 .*limit/);
  }, 60_000);

  it('style rules that take long to match', async () => {
    const rules = Array.from(
      { length: 2_000 },
      (_, i) => `g ~ g:nth-child(${i}n+1) path { stroke: #00${i % 10} }`,
    );
    const groups = '<g><path d="M0 0h1"/></g>'.repeat(2_000);
    expect(await refusal(drawing(`<style>${rules.join('')}</style>${groups}`))).toMatch(
      /steps to match \(the limit\)/,
    );
  }, 60_000);

  it.each([
    ['a selector', `<style>${'path:not('.repeat(20_000)}x${')'.repeat(20_000)} { stroke: red }</style>`],
    ['a style attribute', `<path style="stroke: ${'('.repeat(50_000)}" d="M0 0h1"/>`],
    ['a paint', `<path stroke="rgb(${'('.repeat(50_000)},,,)" d="M0 0h1"/>`],
    ['a transform', `<path transform="${'translate('.repeat(50_000)}" d="M0 0h1"/>`],
    ['a media query', `<style>${'@media all {'.repeat(20_000)}</style>`],
  ])('%s with brackets in brackets', async (_, content) => {
    await check(drawing(`${content}${CHIP}`));
  });
});

describe('numbers that no chip has are refused, and never come out as NaN', () => {
  it.each([
    ['coordinates of 1e308', '<path d="M1e308 1e308L-1e308 0" fill="none" stroke="#000"/>'],
    ['relative steps of 1e308', '<path d="M0 0l1e308 0 1e308 0" fill="none" stroke="#000"/>'],
    ['numbers beyond a double', '<path d="M1e999 0L1 1" fill="none" stroke="#000"/>'],
    ['a scale of 1e308', '<g transform="scale(1e308)"><path d="M0 0L9 9" fill="none" stroke="#000"/></g>'],
    ['scales that multiply', `<g transform="scale(1e200)"><g transform="scale(1e200)">${CHIP}</g></g>`],
    ['a scale of 1e-308', `<g transform="scale(1e-308)">${CHIP}</g>`],
    ['a stroke of 1e308', '<path d="M5 10H60" fill="none" stroke="#000" stroke-width="1e308"/>'],
    ['a stroke of 1e-308', '<path d="M5 10H60" fill="none" stroke="#000" stroke-width="1e-308"/>'],
    ['a circle of 1e308', '<circle r="1e308"/>'],
    ['a circle of 1e-308', '<circle r="1e-308"/>'],
    ['an arc of 1e308', '<path d="M0 0A1e308 1e-308 45 0 1 50 50" fill="none" stroke="#000"/>'],
    ['a rect of 1e308', '<rect width="1e308" height="1e308" rx="1e307" fill="none" stroke="#000"/>'],
    ['a depth of 1e308', `<g data-depth="1e308 um">${CHIP}</g>`],
    ['a depth of 0', `<g data-depth="0 um">${CHIP}</g>`],
    ['a depth below 0', `<g data-depth="-5 um">${CHIP}</g>`],
    ['a nested viewBox of 1e-300', `<svg width="10" height="10" viewBox="0 0 1e-300 1e-300">${CHIP}</svg>`],
  ])('%s', async (_, content) => {
    await check(drawing(content));
  });

  it.each([
    ['a zero viewBox', 'width="100mm" height="50mm" viewBox="0 0 0 0"'],
    ['a flat viewBox', 'width="100mm" height="50mm" viewBox="0 0 100 0"'],
    ['a negative viewBox', 'width="100mm" height="50mm" viewBox="0 0 -100 50"'],
    ['no width', 'width="0mm" height="50mm" viewBox="0 0 100 50"'],
    ['a negative width', 'width="-1mm" height="50mm" viewBox="0 0 100 50"'],
    ['a viewBox of words', 'width="100mm" height="50mm" viewBox="a b c d"'],
  ])('%s is refused', async (_, root) => {
    expect(await refusal(drawing(CHIP, root))).toMatch(/chip\.svg:1: <svg>:/);
  });

  it.each([
    ['a page of 1e308', 'width="1e308mm" height="1e308mm" viewBox="0 0 1 1"'],
    ['a page of 1e-308', 'width="1e-308mm" height="1e-308mm" viewBox="0 0 100 50"'],
    ['a viewBox of 1e308', 'width="100mm" height="50mm" viewBox="0 0 1e308 1e308"'],
    ['a viewBox of 1e-308', 'width="100mm" height="50mm" viewBox="0 0 1e-308 1e-308"'],
    ['a viewBox far away', 'width="100mm" height="50mm" viewBox="1e308 1e308 100 50"'],
  ])('%s', async (_, root) => {
    await check(drawing(CHIP, root));
  });

  it.each([
    ['unit', 'unit: 1e300 mm'],
    ['a small unit', 'unit: 1e-300 mm'],
    ['viscosity', 'fluid: { viscosity: 1e-300 Pa s, density: 1000 kg/m^3 }'],
    ['large viscosity', 'fluid: { viscosity: 1e300 Pa s, density: 1000 kg/m^3 }'],
    ['depth', 'layers: { a: { depth: 1e-300 um } }'],
    ['join_within', 'join_within: 1e300 m'],
    ['size', 'size: [1e300 mm, 1e-300 mm]'],
    ['temperature', 'temperature: 1e300 degC'],
    ['limits', 'limits: { min_width: 1e300 m, min_wall: 1e-300 m, max_pressure: 1e300 Pa }'],
  ])('a run sheet with an extreme %s', async (_, line) => {
    await check(drawing(CHIP), `${RUN}${line}\n`);
  });

  it.each([
    ['pressure', 'in: { pressure: 1e300 Pa }\n  out: open'],
    ['tiny pressure', 'in: { pressure: 1e-300 Pa }\n  out: open'],
    ['flow', 'in: { flow: 1e300 m^3/s }\n  out: open'],
    ['head', 'in: { head: 1e300 m }\n  out: open'],
    ['tubing', 'in: { pressure: 1 kPa, tubing: { bore: 1e-300 m, length: 1e300 m } }\n  out: open'],
  ])('a port with an extreme %s', async (_, ports) => {
    await check(drawing(CHIP), `depth: 50 um\nports:\n  ${ports}\n`);
  });
});

describe('ids', () => {
  it('two channels may share one, and both are there', async () => {
    const { code, out } = await check(
      drawing(`${CHIP}<path id="run" d="M5 10V40H60V10" fill="none" stroke="#000" stroke-width=".2"/>`),
      RUN,
      '--detail',
      'reaches',
    );
    expect(code).toBeLessThan(2);
    expect(out).toContain('"run-2"');
  });

  it('two ports may not', async () => {
    expect(await refusal(drawing(`${CHIP}<circle id="in" cx="80" cy="10" r="1"/>`))).toMatch(
      /two ports are named "in".*give each a name of its own/,
    );
  });

  it.each(['__proto__', 'constructor'])('a name %s is refused', async (name) => {
    const sheet = `depth: 50 um\nports:\n  "${name}": { pressure: 10 kPa }\n  out: open\n`;
    expect(await refusal(drawing(CHIP.replace('"in"', `"${name}"`)), sheet)).toMatch(/can't be a name/);
  });

  it.each(['toString', 'hasOwnProperty', 'null', 'true', '007', '1e3', '-'])(
    'a port, a channel and a layer named %s',
    async (name) => {
      const content = CHIP.replace('"in"', `"${name}"`).replace('"run"', `"${name} 2"`);
      const sheet = `depth: 50 um\nlayers: { "${name}": { depth: 40 um } }\nports:\n  "${name}": { pressure: 10 kPa }\n  out: open\nchannels: { "${name} 2": { flow: { min: 0 uL/min } } }\n`;
      const { code, err } = await check(
        drawing(`<g data-name="${name}">${content}</g>`),
        sheet,
        '--detail',
        'reaches',
      );
      expect(code, err).toBe(0);
    },
  );

  it('a name of a million letters is refused', async () => {
    const long = 'x'.repeat(1_000_000);
    const message = /chip\.svg:1: <path> "x+…?".*1000000 characters, over 1000 \(the limit\)/;
    expect(await refusal(drawing(CHIP.replace('"run"', `"${long}"`)))).toMatch(message);
    expect(await refusal(drawing(`<g id="${long}">${CHIP}</g>`))).toMatch(/over 1000 \(the limit\)/);
    expect(await refusal(drawing(CHIP), `title: ${'x'.repeat(900_000)}\n${RUN}`)).toMatch(
      /over 1000 \(the limit\)/,
    );
  });

  it('names of a thousand letters are printed', async () => {
    const argv = ['check', 'chip.svg', '-f', 'pdf,svg,csv,json'];
    const content = CHIP.replace('"run"', `"${'x'.repeat(1000)}"`).replace('"out"', `"${'o '.repeat(499)}"`);
    const ran = await runOn({ 'chip.svg': drawing(content), 'chip.run.yaml': 'depth: 50 um\n' }, argv);
    expect(faultsOf(ran, argv)).toEqual([]);
    expect(ran.code).toBe(1);
  });
});
