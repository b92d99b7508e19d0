/**
 * The building blocks of the run-sheet schema: each checks a piece of the text tree and hands on SI values, with
 * messages that say what was written and what would have been right. The key and line are added by parse.ts.
 */
import * as v from 'valibot';
import { withoutEscapes } from '../escaped-names.ts';
import { recordOf } from './names.ts';
import { didYouMean } from './nearest.ts';
import { hint, quote } from './quote.ts';
import { describeQuantity, parseQuantity, type Quantity, QuantityError } from './units.ts';

/** A schema that reads anything and hands on `T`. */
export type Field<T> = v.GenericSchema<unknown, T>;

type Bound = 'above 0' | 'not below 0' | 'any';

interface QuantityOptions {
  readonly bound: Bound;
  /** What it is called in messages, with its article: "a depth". */
  readonly noun?: string | undefined;
  /** A right example, number and unit: "300 mm". */
  readonly example?: string;
  readonly description: string;
}

/** One quantity with a unit, as an SI number. */
export function quantity(
  kind: Quantity,
  { bound, noun, example, description }: QuantityOptions,
): Field<number> {
  const usual = describeQuantity(kind);
  const shown = example ?? usual.example;
  const exampleUnit = unitOf(shown);
  return scalar(
    shown,
    { description, examples: [shown], ...(usual.isBare ? { type: ['string', 'number'] } : {}) },
    (text) => {
      const value = parseQuantity(text, kind, exampleUnit);
      checkBound(text, value, bound, noun ?? usual.word, shown);
      return value;
    },
  );
}

/**
 * A text that must not be empty: a title. Editors may read `007` as a number, so the JSON Schema allows one.
 * @param read what is made of it first
 */
export function text(
  description: string,
  example: string,
  read: (written: string) => string = String,
): Field<string> {
  return scalar(example, { description, examples: [example], type: ['string', 'number'] }, (written) => {
    const shown = read(written);
    if (shown.trim() === '') throw new QuantityError(`is empty; ${hint(example)}`);
    if (shown.length <= MAX_TEXT) return shown;
    throw new QuantityError(`has ${shown.length} characters, over ${MAX_TEXT} (the limit); shorten it`);
  });
}

/** A name of the drawing, or a pattern of such names: an editor's escapes are read in it. */
export function drawnName(description: string, example: string): Field<string> {
  return text(description, example, withoutEscapes);
}

/** Longest text in characters: it is printed on paper. */
const MAX_TEXT = 1000;

/** One word of a list. */
export function word<const T extends string>(options: readonly T[], description: string): Field<T> {
  return scalar(options[0], { description, enum: options }, (written) => {
    const found = options.find((option) => option === written.trim());
    if (found !== undefined) return found;
    const guess = didYouMean(written, options);
    throw new QuantityError(
      `${quote(written)} is not one of ${options.join(', ')}${guess === null ? '' : `; ${guess}`}`,
    );
  });
}

/**
 * Any text that `read` makes something of; `read` throws QuantityError.
 * @param metadata its description, which then has the one example; or all that the JSON Schema says of it
 */
export function scalar<T>(
  example: string,
  metadata: string | Readonly<Record<string, unknown>>,
  read: (text: string) => T,
): Field<T> {
  const all = typeof metadata === 'string' ? { description: metadata, examples: [example] } : { ...metadata };
  return byShape({ text: v.pipe(v.string(), v.metadata(all), reading(read)) }, hint(example));
}

/** A key of a map that must be there, has a value for when it is missing, or a name of its own. */
export interface Key<T, Name extends string | null> {
  readonly field: Field<unknown>;
  /** What the value is called once it is read; null: as it is written. */
  readonly name: Name;
  /** Stands for a key that is missing. */
  readonly otherwise: T | null;
}

export function required<T>(field: Field<T>): Key<T, null> {
  return { field, name: null, otherwise: null };
}

export function withDefault<T>(field: Field<T>, otherwise: T): Key<T, null> {
  return { field: v.optional(field), name: null, otherwise };
}

/** A key whose value has another name once it is read, with its unit: `min_width` is `minWidthM`. */
export function called<const Name extends string, T>(name: Name, key: Key<T, null>): Key<T, Name>;
export function called<const Name extends string, T>(name: Name, key: Field<T>): Key<T | null, Name>;
export function called<const Name extends string, T>(
  name: Name,
  key: Key<T, null> | Field<T>,
): Key<T | null, Name> {
  return { ...toKey(key), name };
}

function toKey<T>(key: Key<T, string | null> | Field<T>): Key<T | null, string | null> {
  return 'field' in key ? key : withDefault<T | null>(key, null);
}

/** What a map of keys hands on. */
type ValuesOf<Keys> = {
  readonly [K in keyof Keys as Keys[K] extends Key<unknown, infer Name extends string>
    ? Name
    : K]: Keys[K] extends Key<infer T, string | null> ? T : Keys[K] extends Field<infer T> ? T | null : never;
};

/** Named keys, all known here; any other is an error that names the nearest. A key that is a field alone may be missing: null then. */
export function keys<Keys extends Readonly<Record<string, Field<unknown> | Key<unknown, string | null>>>>(
  given: Keys,
  example: string,
): Field<ValuesOf<Keys>> {
  const known = Object.entries(given).map(([key, one]) => ({ key, ...toKey(one) }));
  const schema = v.strictObject(Object.fromEntries(known.map(({ key, field }) => [key, field])), (issue) => {
    const key = issue.path?.at(-1)?.key;
    if (issue.expected !== 'never')
      return `needs the key ${issue.expected.replaceAll('"', '')}; ${hint(example)}`;
    const names = Object.keys(given);
    return `unknown key; ${didYouMean(String(key), names) ?? `known here: ${names.join(', ')}`}`;
  });
  const values = reading<Readonly<Record<string, unknown>>, ValuesOf<Keys>>(
    (read) =>
      // Each value is what its field hands on, under the name that its key gives it: ValuesOf says the same of the types.
      Object.fromEntries(
        known.map(({ key, name, otherwise }) => [name ?? key, read[key] ?? otherwise]),
      ) as ValuesOf<Keys>,
  );
  return byShape({ map: v.pipe(schema, values) }, hint(example));
}

/** Keys that are names: a record without a prototype. */
export function named<T>(value: Field<T>, example: string): Field<Readonly<Record<string, T>>> {
  const values = reading((given: Readonly<Record<string, T>>) => recordOf(Object.entries(given)));
  return byShape({ map: v.pipe(v.record(v.string(), value), values) }, hint(example));
}

export function list<T>(item: Field<T>, example: string): Field<readonly T[]> {
  return byShape({ list: v.array(item) }, hint(example));
}

/** Exactly two values, the second not below the first when `ordered`. */
export function pair(
  item: Field<number>,
  ordered: boolean,
  example: string,
): Field<readonly [number, number]> {
  const two = v.pipe(
    v.array(item),
    v.length(2, (issue) => `has ${issue.input.length} values and needs 2; ${hint(example)}`),
    reading(([first, second]: number[]): readonly [number, number] => {
      if (ordered && second < first) throw new Complaint(`has the larger value first; ${hint(example)}`);
      return [first, second];
    }),
  );
  return byShape({ list: two }, hint(example));
}

/** What may stand at a place in the sheet, by its shape. */
interface Shapes<Text, List, Map> {
  readonly text?: Field<Text>;
  readonly list?: Field<List>;
  readonly map?: Field<Map>;
}

/** One schema for each shape that may stand here; any other shape is an error. */
export function byShape<Text = never, List = never, Map = never>(
  options: Shapes<Text, List, Map>,
  wanted: string,
): Field<Text | List | Map> {
  const all: Field<Text | List | Map>[] = Object.values(options);
  // Asked without input (for the JSON Schema), it is the union of its options.
  const any = all.length === 1 ? all[0] : v.union(all);
  return v.lazy((input: unknown): Field<Text | List | Map> => {
    if (input === undefined) return any;
    const shape = shapeOf(input);
    return options[shape] ?? v.never(`is ${SHAPES[shape]}; ${wanted}`);
  });
}

/** What is wrong with a map as a whole, or with one of its keys. */
export class Complaint extends QuantityError {
  readonly key: string | null;

  constructor(message: string, key: string | null = null) {
    super(message);
    this.key = key;
  }
}

/** Turns one checked form into another, or checks several keys of it: `change` throws a Complaint. */
export function changed<A, B>(field: Field<A>, change: (value: A) => B): Field<B> {
  return v.pipe(field, reading(change));
}

export function described<T>(field: Field<T>, description: string): Field<T> {
  // The JSON Schema gets no description that stands after a transformation, so the field is kept apart.
  return v.pipe(
    v.lazy(() => field),
    v.description(description),
  );
}

export interface Tolerance {
  readonly kind: 'relative' | 'absolute';
  readonly value: number;
  readonly distribution: 'normal' | 'uniform';
}

/** Tolerance as a percentage or an absolute value, 2 sigma of a normal; `{ limit: … }` is a uniform hard limit. */
export function tolerance(
  kind: Quantity,
  share: 'with share' | 'absolute only',
  example: string,
): Field<Tolerance> {
  const value = toleranceValue(kind, share, example);
  const limit = changed(
    keys({ limit: required(value) }, `{ limit: ${example} }`),
    (given): Tolerance => ({ ...given.limit, distribution: 'uniform' }),
  );
  return byShape({ text: value, map: limit }, hint(example));
}

/** A tolerance for all, or one for each name with `default` for the rest. */
interface ToleranceByName {
  readonly all: Tolerance | null;
  readonly byName: Readonly<Record<string, Tolerance>>;
}

export function toleranceByName(kind: Quantity, example: string): Key<ToleranceByName, null> {
  const one = tolerance(kind, 'with share', example);
  const all = changed(one, (value): ToleranceByName => ({ all: value, byName: recordOf([]) }));
  const each = changed(
    named(one, `{ lanes: ${example} }`),
    (given): ToleranceByName => ({
      all: given.default ?? null,
      byName: recordOf(Object.entries(given).filter(([name]) => name !== 'default')),
    }),
  );
  const either = v.lazy((input: unknown) => {
    if (input === undefined) return v.union([all, each]);
    return shapeOf(input) !== 'map' || Object.keys(Object(input)).join() === 'limit' ? all : each;
  });
  return withDefault(either, { all: null, byName: recordOf([]) });
}

const SHAPES = {
  text: 'one text',
  list: 'a list',
  map: 'a map of keys and values',
};

function shapeOf(input: unknown): keyof typeof SHAPES {
  if (typeof input === 'string') return 'text';
  return Array.isArray(input) ? 'list' : 'map';
}

/** "um" of "50 um", nothing of "10". */
function unitOf(example: string): string {
  return example.replace(/^[^ ]* ?/, '');
}

function checkBound(text: string, value: number, bound: Bound, noun: string, example: string): void {
  if (bound === 'any' || value > 0 || (bound === 'not below 0' && value === 0)) return;
  const state = value === 0 ? 'is zero' : 'is below 0';
  throw new QuantityError(`${quote(text)} ${state}; ${noun} must be ${bound}; ${hint(example)}`);
}

function toleranceValue(
  kind: Quantity,
  share: 'with share' | 'absolute only',
  example: string,
): Field<Tolerance> {
  return scalar(example, TOLERANCE, (written): Tolerance => {
    const relative = /%\s*$/.test(written);
    if (relative && share === 'absolute only') {
      throw new QuantityError(
        `${quote(written)} is a percentage; ${describeQuantity(kind).word} is needed; ${hint(example)}`,
      );
    }
    const value = parseQuantity(written, relative ? 'share' : kind, relative ? '%' : unitOf(example));
    checkBound(written, value, 'not below 0', 'a tolerance', example);
    if (relative && value >= 1)
      throw new QuantityError(`${quote(written)} is not below 100 %; ${hint(example)}`);
    return { kind: relative ? 'relative' : 'absolute', value, distribution: 'normal' };
  });
}

const TOLERANCE =
  'A percentage or a value with unit: 2 sigma of a normal distribution. { limit: … } is a uniform hard limit.';

/** A step of a schema that makes something else of what is read; `read` throws QuantityError. */
function reading<A, B>(read: (value: A) => B): v.RawTransformAction<A, B> {
  return v.rawTransform(({ dataset, addIssue, NEVER }) => {
    try {
      return read(dataset.value);
    } catch (error) {
      if (!(error instanceof QuantityError)) throw error;
      addIssue({ message: error.message, ...pathTo(error, dataset.value) });
      return NEVER;
    }
  });
}

function pathTo(error: QuantityError, value: unknown): { readonly path?: [v.IssuePathItem] } {
  if (!(error instanceof Complaint) || error.key === null) return {};
  const { key } = error;
  const input: Record<string, unknown> = Object(value);
  return { path: [{ type: 'object', origin: 'value', input, key, value: input[key] }] };
}
