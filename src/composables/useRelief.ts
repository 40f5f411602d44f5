import { shallowRef, type ShallowRef } from 'vue';
import { decodeFloatCells } from '../../shared/analysis/cellBytes.ts';
import type { ReliefView } from '../../shared/contracts/layers.ts';
import { HttpProblem } from '../lib/httpProblem.ts';

type Corner = readonly [number, number];

export interface ReliefPicture {
  readonly cells: Float32Array;
  readonly columns: number;
  readonly rows: number;
  readonly cellSizeM: number;
  readonly cornersLonLat: readonly [Corner, Corner, Corner, Corner];
  readonly contourStepM: number;
}

/** About so many contours should cross the land, at a round step. */
const wantedContours = 24;
const steps = [0.5, 1, 2, 5, 10, 20, 50, 100];

/** The lie of the land for maps. Without it the map is only flatter: a failed request is not a problem of the screen. */
export function useRelief(request: () => Promise<ReliefView | null>): { relief: ShallowRef<ReliefPicture | null>; load: () => Promise<void> } {
  const relief = shallowRef<ReliefPicture | null>(null);
  return {
    relief,
    load: async () => {
      try {
        relief.value = pictureOf(await request());
      } catch (error) {
        if (!(error instanceof HttpProblem)) throw error;
      }
    },
  };
}

export function pictureOf(view: ReliefView | null): ReliefPicture | null {
  if (view === null) return null;
  const cells = decodeFloatCells(Uint8Array.from(atob(view.cells), (letter) => letter.charCodeAt(0)));
  const [nw, ne, se, sw] = view.cornersLonLat;
  return { cells, columns: view.columns, rows: view.rows, cellSizeM: view.cellSizeM, cornersLonLat: [nw!, ne!, se!, sw!], contourStepM: contourStep(cells) };
}

function contourStep(cells: Float32Array): number {
  let [low, high] = [Infinity, -Infinity];
  for (const height of cells) {
    if (height < low) low = height;
    if (height > high) high = height;
  }
  return steps.find((step) => (high - low) / step <= wantedContours) ?? steps.at(-1)!;
}
