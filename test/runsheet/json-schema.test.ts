import { describe, expect, it } from 'vitest';
import { runSheetJsonSchema } from '../../src/runsheet/json-schema.ts';
import { SHEET_KEYS } from '../../src/runsheet/schema.ts';
import { parseTree, toPlain } from '../../src/runsheet/tree.ts';
import { FULL_SHEET } from './full-sheet.ts';

type Json = Readonly<Record<string, unknown>>;
const schema = runSheetJsonSchema() as Json;

describe('runSheetJsonSchema', () => {
  it('has every key of the sheet, each with a description', () => {
    const properties = schema.properties as Readonly<Record<string, Json>>;
    expect(Object.keys(properties).sort()).toEqual([...SHEET_KEYS].sort());
    for (const [key, property] of Object.entries(properties)) {
      const options = (property.anyOf ?? []) as readonly Json[];
      expect(
        [property, ...options].some(({ description }) => typeof description === 'string'),
        key,
      ).toBe(true);
    }
    expect(schema.additionalProperties).toBe(false);
  });

  it('is one self-contained document', () => {
    const text = JSON.stringify(schema);
    expect(text).not.toContain('$ref');
    expect(text).not.toContain('$defs');
    expect(schema.$schema).toBe('https://json-schema.org/draft/2020-12/schema');
  });

  it('accepts a sheet with every key, as an editor reads it', () => {
    expect(complaints(schema, toPlain(parseTree(FULL_SHEET, 'c.run.yaml')), '')).toEqual([]);
    expect(complaints(schema, { title: 7, limits: { max_width_to_depth: 10 } }, '')).toEqual([]);
    expect(
      complaints(schema, { cases: { a: { ports: { feed: { tubing: { bore: '1 mm' } } } } } }, ''),
    ).toEqual([]);
  });

  it('refuses unknown keys, wrong shapes, missing keys and wrong words at any depth', () => {
    for (const wrong of [
      { dpeth: '50 um' },
      { depth: ['50 um'] },
      { size: ['1 mm'] },
      { ports: { feed: { presure: '1 kPa' } } },
      { ports: { feed: { tubing: { bore: '1 mm' } } } },
      { targets: [{ channel: 'a', flow: '1 uL/min' }] },
      { cases: { a: { targets: [{ channel: 'a', flow: '1 uL/min' }] } } },
      { cases: { a: { cases: {} } } },
      { joints: 'resolvd' },
      { limits: { min_width: 3 } },
    ]) {
      expect(complaints(schema, wrong, ''), JSON.stringify(wrong)).not.toEqual([]);
    }
  });
});

/** The part of JSON Schema that the run sheet uses. */
function complaints(rule: Json, value: unknown, at: string): readonly string[] {
  if (Array.isArray(rule.anyOf)) {
    const all = (rule.anyOf as readonly Json[]).map((option) => complaints(option, value, at));
    if (!all.some((one) => one.length === 0)) return [`${at}: fits none`, ...all.flat()];
  }
  const found: string[] = [];
  const types = [rule.type ?? []].flat();
  const type = Array.isArray(value) ? 'array' : typeof value;
  if (types.length > 0 && !types.includes(type)) return [`${at}: is ${type}`];
  if (Array.isArray(rule.enum) && !rule.enum.includes(value)) found.push(`${at}: not in enum`);
  if (Array.isArray(value)) {
    if (value.length < Number(rule.minItems ?? 0) || value.length > Number(rule.maxItems ?? Infinity))
      found.push(`${at}: length`);
    for (const [i, item] of value.entries())
      found.push(...complaints((rule.items ?? {}) as Json, item, `${at}[${i}]`));
  } else if (typeof value === 'object' && value !== null) {
    const properties = (rule.properties ?? {}) as Readonly<Record<string, Json>>;
    for (const key of (rule.required ?? []) as readonly string[])
      if (!(key in value)) found.push(`${at}: lacks ${key}`);
    for (const [key, item] of Object.entries(value)) {
      const known = Object.hasOwn(properties, key) ? properties[key]! : rule.additionalProperties;
      if (known === false) found.push(`${at}.${key}: unknown`);
      else if (typeof known === 'object') found.push(...complaints(known as Json, item, `${at}.${key}`));
    }
  }
  return found;
}
