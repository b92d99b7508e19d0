import { describe, expect, test } from 'vitest';
import { writeReachesCsv, writeSegmentsCsv } from '../../src/report/csv.ts';
import { sampleResult } from './sample.ts';

/** A reader of RFC 4180, written for this test. */
function parseCsv(text: string): string[][] {
  const rows: string[][] = [];
  let row: string[] = [];
  let cell = '';
  let quoted = false;
  for (let i = 0; i < text.length; i++) {
    const c = text[i];
    if (quoted) {
      if (c !== '"') cell += c;
      else if (text[i + 1] === '"') cell += text[i++];
      else quoted = false;
    } else if (c === '"') quoted = true;
    else if (c === ',') {
      row.push(cell);
      cell = '';
    } else if (c === '\r' && text[i + 1] === '\n') {
      rows.push([...row, cell]);
      row = [];
      cell = '';
      i++;
    } else cell += c;
  }
  return rows;
}

describe('CSV', () => {
  test('has the JSON keys as heads and the JSON numbers as cells', () => {
    const result = sampleResult();
    const [heads, ...rows] = parseCsv([...writeReachesCsv(result.reaches)].join(''));
    expect(heads).toEqual(Object.keys(result.reaches.at(0)));
    rows.forEach((cells, i) => {
      Object.values(result.reaches.at(i)).forEach((value, k) => {
        expect(typeof value === 'number' ? Number(cells[k]) : cells[k]).toBe(value ?? '');
      });
    });
    const segments = parseCsv([...writeSegmentsCsv(result.segments)].join(''));
    expect(segments[0]).toEqual(Object.keys(result.segments.at(0)));
    expect(segments).toHaveLength(result.segments.length + 1);
  });

  test.each(['=1+1', '+A1', '-2+3', '@SUM(A1)', '\t=1', ' =1', '\r\n=1', '＝1', '\u200b=1'])(
    'keeps the name %j from running as a formula',
    (name) => {
      const csv = [...writeReachesCsv(sampleResult({ names: { lower: name } }).reaches)].join('');
      const cell = parseCsv(csv)[4][1];
      expect(cell).toBe(`'${name}`);
    },
  );

  test('quotes commas, quotes and line ends', () => {
    const name = 'a,"b"\nc';
    const csv = [...writeReachesCsv(sampleResult({ names: { lower: name } }).reaches)].join('');
    expect(parseCsv(csv)[4][1]).toBe(name);
  });

  test('leaves negative numbers numbers', () => {
    const csv = [...writeReachesCsv(sampleResult({ feedPa: -500 }).reaches)].join('');
    expect(parseCsv(csv)[1][11]).toMatch(/^-\d/);
  });
});
