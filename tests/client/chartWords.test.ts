import { describe, expect, it } from 'vitest';
import { wordLevels } from '../../src/components/base/chartPaint.ts';

describe('words at the drop lines of a chart', () => {
  it('stay on one line where there is room, and take turns where there is none', () => {
    expect(wordLevels([10, 60, 120, 180])).toEqual([0, 0, 0, 0]);
    expect(wordLevels([60, 80, 115, 140])).toEqual([0, 1, 0, 1]);
    expect(wordLevels([100, 100, 100])).toEqual([0, 1, 2]);
    // Whatever order they come in.
    expect(wordLevels([140, 60, 115, 80])).toEqual([1, 0, 0, 1]);
  });
});
