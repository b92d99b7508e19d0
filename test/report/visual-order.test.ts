import { describe, expect, test } from 'vitest';
import { visualChunks } from '../../src/report/pdf/visual-order.ts';

describe('text in the order in which it is seen', () => {
  test('a text without right-to-left letters is left whole', () => {
    for (const text of ['', 'lane-1 0.25 kPa', 'Ωμέγα (α)']) expect(visualChunks(text)).toEqual([text]);
  });

  test('words of a right-to-left name run from right to left, with the space between them', () => {
    expect(visualChunks('p קצר ארוך 0.25 kPa')).toEqual(['p ', 'ארוך', ' ', 'קצר', ' 0.25 kPa']);
  });

  test('a number keeps its digits in order, within the name and after it', () => {
    expect(visualChunks('תא 12 ימין')).toEqual(['ימין', ' ', '12', ' ', 'תא']);
    expect(visualChunks('תא-12')).toEqual(['תא', '-12']);
  });

  test('brackets within are mirrored, as their meaning asks', () => {
    expect(visualChunks('תא (ימין) שמאל')).toEqual(['שמאל', ' ', '(', 'ימין', ')', ' ', 'תא']);
  });

  test('a left-to-right word parts two stretches', () => {
    expect(visualChunks('תא of ימין')).toEqual(['תא', ' of ', 'ימין']);
  });
});
