import { describe, expect, test } from 'vitest';
import { escapeXml, svgPicture } from '../../src/report/svg.ts';
import { readSvg } from '../../src/svg/read.ts';
import { sampleReport } from './sample.ts';

const picture = (
  options: Parameters<typeof sampleReport>[0] = {},
  quantity: 'pressure' | 'shear' | 'flow' | 'residence' = 'shear',
): string => svgPicture(sampleReport(options).cases[0], { quantity });

describe('the SVG picture', () => {
  test.each(['pressure', 'shear', 'flow', 'residence'] as const)(
    'of %s is a drawing with a physical size that our own reader reads',
    (quantity) => {
      const drawing = readSvg(picture({}, quantity), 'picture.svg');
      expect(drawing.unitStated).toBe(true);
      expect(drawing.unitMm).toBeCloseTo(1, 12);
      expect(drawing.shapes.length).toBeGreaterThan(20);
    },
  );

  test('has a title on every reach with its numbers', () => {
    const titles = [...picture().matchAll(/<title>([^<]*)<\/title>/g)].map(([, title]) => title);
    const { reaches } = sampleReport().cases[0].part;
    for (const reach of reaches) {
      const title = titles.find((text) => text.startsWith(`${reach.name} (`));
      expect(title).toContain(`${reach.from} → ${reach.to}`);
    }
    const lane = titles.find((text) => text.startsWith('lane-2 ('));
    expect(lane?.split('\n')).toEqual([
      'lane-2 (J1 → J3)',
      'flow 35.73 µL/min',
      'pressure drop 0.385 kPa',
      'floor shear 0.3516 Pa mean, 0.4033 Pa peak',
      'residence 5.757 s mean, 3.267 s fastest',
      '500 µm wide, 120 µm deep, 57.14 mm long',
    ]);
  });

  test('marks each finding by its number, with its message', () => {
    const text = picture();
    expect(text).toContain('<title>1 thin-wall: 31 µm of material');
    expect(text).toMatch(/font-weight="bold">1<\/text>/);
  });

  test('carries no script, handler, link, style sheet, id or foreign element, whatever the names', () => {
    const names = {
      feed: '"><script>alert(1)</script>',
      upper: `' onload='alert(1)`,
      lower: ']]><image href="http://example.org/x"/>&xxe;',
    };
    const text = picture({ names });
    const tags = new Set([...text.matchAll(/<([A-Za-z]+)/g)].map(([, tag]) => tag));
    expect([...tags].sort()).toEqual(['circle', 'desc', 'g', 'path', 'rect', 'svg', 'text', 'title']);
    const attributes = new Set(
      [...text.replace(/>[^<]*</g, '><').matchAll(/ ([a-zA-Z:-]+)="/g)].map(([, name]) => name),
    );
    for (const name of attributes) expect(name).not.toMatch(/^on|href|^style$|^id$|^class$/);
    expect(text).toContain('&lt;script&gt;');
    expect(readSvg(text, 'picture.svg').shapes.length).toBeGreaterThan(20);
  });

  test('keeps the value behind a right-to-left name by a left-to-right mark', () => {
    const text = picture({ names: { lower: 'קצר' } });
    expect(text).toMatch(/>קצר\u200e 0\.\d+<\/text>/);
    expect(picture()).not.toContain('\u200e');
  });

  test('escapes what XML can not hold', () => {
    expect(escapeXml('a<b>&"\'\u0001\uffff')).toBe('a&lt;b&gt;&amp;&quot;&#39;\ufffd\ufffd');
  });

  test('is the same text twice, with no −0, NaN or exponent in its numbers', () => {
    expect(picture()).toBe(picture());
    expect(picture().replace(/<title>[^<]*<\/title>/g, '')).not.toMatch(/[" ]-0[" ]|NaN|Infinity|\de-\d/);
    expect(picture({ feedPa: 0 })).not.toMatch(/NaN|Infinity/);
  });
});
