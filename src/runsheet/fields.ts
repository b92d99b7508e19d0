/**
 * The building blocks of the run-sheet schema: each checks a piece of the text tree and hands on SI values, with
 * messages that say what was written and what would have been right. The key and line are added by parse.ts.
 */
import * as v from 'valibot';
import { nearest } from './nearest.ts';
import { quote } from './quote.ts';
import type { Tolerance } from './types.ts';
import { describeQuantity, parseQuantity, type Quantity, QuantityError } from './units.ts';

/** A schema that reads anything and hands on `T`. */
export type Field<T> = v.GenericSchema<unknown, T>;

export type Bound = 'above 0' | 'not below 0' | 'any';

export interface QuantityOptions {
  readonly bound: Bound;
  /** What it is called in messages, with its article: "a depth". */
  readonly noun?: string;
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
  const exampleUnit = shown.replace(/^[^ ]* ?/, '');
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

/** A text that must not be empty: a name, a title. Editors may read `007` as a number, so the JSON Schema allows one. */
export function text(description: string, example: string): Field<string> {
  return scalar(example, { description, examples: [example], type: ['string', 'number'] }, (written) => {
    if (written.trim() === '') throw new QuantityError(`is empty; ${hint(example)}`);
    if (written.length > MAX_TEXT) {
      throw new QuantityError(`has ${written.length} characters, over ${MAX_TEXT} (the limit); shorten it`);
    }
    return written;
  });
}

/** Longest text in characters: it is printed on paper. */
const MAX_TEXT = 1000;

/** One word of a list. */
export function word<const T extends string>(options: readonly T[], description: string): Field<T> {
  return scalar(options[0]!, { description, enum: options }, (written) => {
    const found = options.find((option) => option === written.trim());
    if (found !== undefined) return found;
    const near = nearest(written, options);
    const guess = near === null ? '' : `; did you mean ${quote(near)}?`;
    throw new QuantityError(`${quote(written)} is not one of ${options.join(', ')}${guess}`);
  });
}

/** Any text that `read` makes something of; `read` throws QuantityError. */
export function scalar<T>(
  example: string,
  metadata: Readonly<Record<string, unknown>>,
  read: (text: string) => T,
): Field<T> {
  const schema = v.pipe(
    v.string(),
    v.metadata({ ...metadata }),
    v.rawTransform<string, T>(({ dataset, addIssue, NEVER }) => {
      try {
        return read(dataset.value);
      } catch (error) {
        if (!(error instanceof QuantityError)) throw error;
        addIssue({ message: error.message });
        return NEVER;
      }
    }),
  );
  return byShape({ text: schema }, hint(example));
}

/** Named keys, all known here; any other is an error that names the nearest. */
export function keys<const E extends v.ObjectEntries>(
  entries: E,
  example: string,
): Field<v.InferOutput<v.StrictObjectSchema<E, undefined>>> {
  const known = Object.keys(entries);
  const schema = v.strictObject(entries, (issue) => {
    const key = issue.path?.at(-1)?.key;
    if (issue.expected !== 'never')
      return `needs the key ${issue.expected.replaceAll('"', '')}; ${hint(example)}`;
    const near = nearest(String(key), known);
    if (near !== null) return `unknown key; did you mean ${quote(near)}?`;
    return `unknown key; known here: ${known.join(', ')}`;
  });
  // The output does not depend on whether messages are given, which is all that the two types differ in.
  return byShape({ map: schema as Field<v.InferOutput<v.StrictObjectSchema<E, undefined>>> }, hint(example));
}

/** Keys that are names of the drawing. */
export function named<T>(value: Field<T>, example: string): Field<Readonly<Record<string, T>>> {
  return byShape({ map: v.record(v.string(), value) }, hint(example));
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
  return byShape(
    {
      list: v.pipe(
        v.array(item),
        v.length(2, (issue) => `has ${issue.input.length} values and needs 2; ${hint(example)}`),
        v.rawTransform<number[], readonly [number, number]>(({ dataset: { value }, addIssue, NEVER }) => {
          const [first, second] = [value[0]!, value[1]!];
          if (ordered && second < first) {
            addIssue({ message: `has the larger value first; ${hint(example)}` });
            return NEVER;
          }
          return [first, second];
        }),
      ),
    },
    hint(example),
  );
}

type Shape = 'text' | 'list' | 'map';

/** One schema for each shape that may stand here; any other shape is an error. */
export function byShape<T>(options: Readonly<Partial<Record<Shape, Field<T>>>>, wanted: string): Field<T> {
  const all = Object.values(options);
  // Asked without input (for the JSON Schema), it is the union of its options.
  const any = all.length === 1 ? all[0]! : v.union(all);
  return v.lazy((input: unknown): Field<T> => {
    if (input === undefined) return any;
    const shape = shapeOf(input);
    return options[shape] ?? v.never(`is ${SHAPES[shape]}; ${wanted}`);
  });
}

/** A check over several keys of a map or entries of a list; it may point at one of them. */
export function checked<T>(field: Field<T>, check: (value: T) => Complaint | null): Field<T> {
  return v.pipe(
    field,
    v.rawCheck<T>(({ dataset, addIssue }) => {
      if (!dataset.typed) return;
      const complaint = check(dataset.value);
      if (complaint !== null) addIssue(issueOf(complaint, dataset.value));
    }),
  );
}

export interface Complaint {
  readonly message: string;
  readonly key?: string;
}

export function described<T>(field: Field<T>, description: string): Field<T> {
  return v.pipe(field, v.description(description));
}

/** Turns one checked form into another; a complaint thrown by `change` becomes an issue. */
export function changed<A, B>(
  field: Field<A>,
  change: (value: A) => B | Complaint,
  isComplaint: (value: B | Complaint) => value is Complaint,
): Field<B> {
  return v.pipe(
    field,
    v.rawTransform<A, B>(({ dataset, addIssue, NEVER }) => {
      const result = change(dataset.value);
      if (!isComplaint(result)) return result;
      addIssue(issueOf(result, dataset.value));
      return NEVER;
    }),
  );
}

/** Tolerance as a percentage or an absolute value, 2 sigma of a normal; `{ limit: … }` is a uniform hard limit. */
export function tolerance(
  kind: Quantity,
  share: 'with share' | 'absolute only',
  example: string,
): Field<Tolerance> {
  const value = toleranceValue(kind, share, example);
  const limit = keys({ limit: value }, `{ limit: ${example} }`);
  return byShape<Tolerance>(
    {
      text: value,
      map: v.pipe(
        limit,
        v.transform((given): Tolerance => ({ ...given.limit, distribution: 'uniform' })),
      ),
    },
    hint(example),
  );
}

/** A tolerance for all, or one for each name with `default` for the rest. */
export function toleranceByName(
  kind: Quantity,
  example: string,
): Field<{ readonly all: Tolerance | null; readonly byName: Readonly<Record<string, Tolerance>> }> {
  const one = tolerance(kind, 'with share', example);
  const many = named(one, `{ lanes: ${example} }`);
  const all = v.pipe(
    one,
    v.transform((value) => ({ all: value, byName: noNames })),
  );
  const each = v.pipe(
    many,
    v.transform((given) => {
      const byName: Record<string, Tolerance> = Object.create(null);
      for (const [name, value] of Object.entries(given)) if (name !== 'default') byName[name] = value;
      return { all: given.default ?? null, byName };
    }),
  );
  type Both = { readonly all: Tolerance | null; readonly byName: Readonly<Record<string, Tolerance>> };
  return v.lazy((input: unknown): Field<Both> => {
    if (input === undefined) return v.union([all, each]);
    return shapeOf(input) !== 'map' || Object.keys(Object(input)).join() === 'limit' ? all : each;
  });
}

export function hint(example: string): string {
  return `write for example ${example.startsWith('{') || example.startsWith('[') ? example : `"${example}"`}`;
}

const noNames: Readonly<Record<string, Tolerance>> = Object.freeze(Object.create(null));

const SHAPES: Readonly<Record<Shape, string>> = {
  text: 'one text',
  list: 'a list',
  map: 'a map of keys and values',
};

function shapeOf(input: unknown): Shape {
  if (typeof input === 'string') return 'text';
  return Array.isArray(input) ? 'list' : 'map';
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
  return scalar(example, { description: TOLERANCE, examples: [example] }, (written): Tolerance => {
    const relative = /%\s*$/.test(written);
    if (relative && share === 'absolute only') {
      throw new QuantityError(
        `${quote(written)} is a percentage; ${describeQuantity(kind).word} is needed; ${hint(example)}`,
      );
    }
    const value = parseQuantity(
      written,
      relative ? 'share' : kind,
      relative ? '%' : example.replace(/^[^ ]* ?/, ''),
    );
    checkBound(written, value, 'not below 0', 'a tolerance', example);
    if (relative && value >= 1)
      throw new QuantityError(`${quote(written)} is not below 100 %; ${hint(example)}`);
    return { kind: relative ? 'relative' : 'absolute', value, distribution: 'normal' };
  });
}

const TOLERANCE =
  'A percentage or a value with unit: 2 sigma of a normal distribution. { limit: … } is a uniform hard limit.';

function issueOf<T>(complaint: Complaint, value: T): { message: string; path?: [v.IssuePathItem] } {
  if (complaint.key === undefined) return { message: complaint.message };
  const input: Record<string, unknown> = Object(value);
  const item = {
    type: 'object',
    origin: 'value',
    input,
    key: complaint.key,
    value: input[complaint.key],
  } as const;
  return { message: complaint.message, path: [item] };
}
