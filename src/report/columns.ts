/** One column of a table for people; terminal and paper draw the same description. */
export interface Column<Row> {
  readonly head: string;
  /** Second line of the head, on paper alone. */
  readonly unit?: string | undefined;
  readonly align: 'left' | 'right';
  /** On paper. `fit`: as wide as its widest cell, never cut. `share`: an equal share of what is left, cut with an ellipsis. `wrap`: the same, in lines. */
  readonly width: 'fit' | 'share' | 'wrap';
  readonly text: (row: Row) => string;
}

export function words<Row>(
  head: string,
  text: (row: Row) => string,
  width: Column<Row>['width'] = 'fit',
): Column<Row> {
  return { head, align: 'left', width, text };
}

export function figures<Row>(head: string, text: (row: Row) => string, unit?: string): Column<Row> {
  return { head, unit, align: 'right', width: 'fit', text };
}
