/**
 * A table whose rows are made on demand from columns, so that 100 000 segments cost nothing until somebody asks.
 * Serialises as an array.
 */
export interface Rows<Row> extends Iterable<Row> {
  readonly length: number;
  /** Row i, 0 ≤ i < length. */
  readonly at: (index: number) => Row;
  readonly toJSON: () => readonly Row[];
}

export function rows<Row>(length: number, at: (index: number) => Row): Rows<Row> {
  function* all(): Generator<Row> {
    for (let i = 0; i < length; i++) yield at(i);
  }
  return { length, at, [Symbol.iterator]: all, toJSON: () => [...all()] };
}
