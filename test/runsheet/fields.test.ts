import * as v from 'valibot';
import { describe, expect, it } from 'vitest';
import {
  Complaint,
  called,
  changed,
  keys,
  named,
  required,
  text,
  withDefault,
} from '../../src/runsheet/fields.ts';

const sheet = keys(
  {
    drawn_by: called('drawnBy', text('Who drew it.', 'AM')),
    by: required(text('Who asks.', 'AM')),
    walls: withDefault(text('Which walls.', 'all'), 'floor'),
  },
  '{ by: AM }',
);

describe('keys', () => {
  it('hand on each value under its own name, and what stands for a missing one', () => {
    expect(v.parse(sheet, { drawn_by: 'BK', by: 'AM', walls: 'all' })).toEqual({
      drawnBy: 'BK',
      by: 'AM',
      walls: 'all',
    });
    expect(v.parse(sheet, { by: 'AM' })).toEqual({ drawnBy: null, by: 'AM', walls: 'floor' });
  });

  it('are asked for by the name they are written with', () => {
    expect(messages(sheet, { drawnBy: 'BK', by: 'AM' })).toEqual([
      { message: 'unknown key; did you mean "drawn_by"?', path: ['drawnBy'] },
    ]);
    expect(messages(sheet, {})).toEqual([
      { message: 'needs the key by; write for example { by: AM }', path: ['by'] },
    ]);
  });
});

describe('named', () => {
  it('is a record that holds no name but those written', () => {
    const ports = v.parse(named(text('A port.', 'feed'), '{ feed: open }'), { feed: 'open' });
    expect(ports.feed).toBe('open');
    expect(ports.toString).toBeUndefined();
  });
});

describe('changed', () => {
  it('points at the key of which it complains', () => {
    const refused = changed(sheet, () => {
      throw new Complaint('goes with walls only', 'by');
    });
    expect(messages(refused, { by: 'AM' })).toEqual([{ message: 'goes with walls only', path: ['by'] }]);
  });

  it('lets a fault of the program through', () => {
    const broken = changed(sheet, () => {
      throw new TypeError('a fault of the program');
    });
    expect(() => v.safeParse(broken, { by: 'AM' })).toThrow(TypeError);
  });
});

function messages(schema: v.GenericSchema, input: unknown) {
  const { issues = [] } = v.safeParse(schema, input);
  return issues.map(({ message, path = [] }) => ({ message, path: path.map(({ key }) => key) }));
}
