import type { StripChoice, StripRow, StripVine } from './rowStripTypes.ts';
import { postPx, vineEdgeM, xOfM, type StripScale } from './stripLayout.ts';
import type { Box } from './stripShapes.ts';

interface FrameOptions {
  readonly rows: readonly StripRow[];
  readonly choice: StripChoice | null;
  /** Frames one vine instead. */
  readonly vine?: StripVine;
  readonly scale: StripScale;
  readonly pitch: number;
  readonly bar: number;
}

/** Frames around a choice: one for each run of neighbouring rows, as wide as the widest row or the chosen part. */
export function choiceFrames({ rows, choice, vine, scale, pitch, bar }: FrameOptions): Box[] {
  const boxOf = (first: number, last: number, [fromX, toX]: readonly [number, number]): Box => {
    const y = first * pitch + 2 + (pitch - bar) / 2 - 1;
    return { x: fromX, y, width: Math.max(2, toX - fromX), height: (last - first) * pitch + bar + 2 };
  };
  if (vine) {
    const index = rows.findIndex((row) => row.id === vine.rowId);
    const row = rows[index];
    return row ? [boxOf(index, index, [xOfM(vineEdgeM(row, vine.vine), scale) - 1, xOfM(vineEdgeM(row, vine.vine + 1), scale) + 1])] : [];
  }
  if (choice === null) return [];
  return runsOf(rows, choice).map(([first, last]) => {
    const run = rows.slice(first, last + 1);
    const from = choice.fromM ?? Math.min(...run.map((row) => row.startOffsetM));
    const to = choice.toM ?? Math.max(...run.map((row) => row.startOffsetM + row.lengthM));
    return boxOf(first, last, [xOfM(from, scale) - (choice.fromM === null ? postPx + 1 : 0), xOfM(to, scale) + (choice.toM === null ? postPx + 1 : 0)]);
  });
}

/** Indexes of first and last row of each unbroken run of chosen rows. */
function runsOf(rows: readonly StripRow[], choice: StripChoice): [number, number][] {
  const runs: [number, number][] = [];
  rows.forEach((row, index) => {
    if (!choice.rowIds.includes(row.id)) return;
    const last = runs.at(-1);
    if (last && last[1] === index - 1) last[1] = index;
    else runs.push([index, index]);
  });
  return runs;
}
