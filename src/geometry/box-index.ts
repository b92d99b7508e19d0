import Flatbush from 'flatbush';

/** What is asked of an index of boxes. Flatbush answers; its own type stays inside, since published types name no package. */
export interface BoxIndex {
  /** Round all boxes. */
  readonly minX: number;
  readonly minY: number;
  readonly maxX: number;
  readonly maxY: number;
  /** Numbers of the boxes that touch a rectangle, of those that `keep` lets through. */
  search(minX: number, minY: number, maxX: number, maxY: number, keep?: (index: number) => boolean): number[];
  /** Numbers of the boxes nearest to a point, the nearest first, of those that `keep` lets through. */
  neighbors(
    x: number,
    y: number,
    maxResults?: number,
    maxDistance?: number,
    keep?: (index: number) => boolean,
  ): number[];
}

/**
 * An index of boxes; one of none finds nothing.
 * @param boxes minX minY maxX maxY of each, one after another
 */
export function indexBoxes(boxes: ArrayLike<number>): BoxIndex {
  if (boxes.length === 0) return NO_BOXES;
  const index = new Flatbush(boxes.length / 4);
  for (let i = 0; i < boxes.length; i += 4) index.add(boxes[i], boxes[i + 1], boxes[i + 2], boxes[i + 3]);
  index.finish();
  return index;
}

const NO_BOXES: BoxIndex = {
  minX: Infinity,
  minY: Infinity,
  maxX: -Infinity,
  maxY: -Infinity,
  search: () => [],
  neighbors: () => [],
};
