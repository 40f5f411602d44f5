import { channels } from './colours.ts';

/** Hillshade of a grid of heights as RGBA pixels. */

export interface HeightGrid {
  readonly cells: ArrayLike<number>;
  readonly columns: number;
  readonly rows: number;
  readonly cellSizeM: number;
}

export interface ReliefInk {
  /** Warm shadow and light laid over the land colour. */
  readonly shade: string;
  readonly light: string;
}

const azimuthDeg = 315;
const altitudeDeg = 45;
/** Gentle ground needs some help to show; steeper land is held by the opacity limit. */
const exaggeration = 2.2;
const strongest = 0.62;

/**
 * Light from the north-west at 45°, slopes by the 3 × 3 gradient of Horn (1981, Proc. IEEE 69:14–47).
 * Level ground stays clear; shadow and light are laid on as far as they differ from it. NaN heights stay clear.
 */
export function reliefPixels({ cells, columns, rows, cellSizeM }: HeightGrid, { shade, light }: ReliefInk): Uint8ClampedArray<ArrayBuffer> {
  const pixels = new Uint8ClampedArray(columns * rows * 4);
  const [dark, bright] = [channels(shade), channels(light)];
  const [azimuth, zenith] = [((360 - azimuthDeg + 90) * Math.PI) / 180, ((90 - altitudeDeg) * Math.PI) / 180];
  const level = Math.cos(zenith);
  const at = (column: number, row: number, own: number) => {
    const height = cells[Math.min(rows - 1, Math.max(0, row)) * columns + Math.min(columns - 1, Math.max(0, column))]!;
    return Number.isNaN(height) ? own : height;
  };
  const edgeDistance = (column: number, row: number) => Math.min(column, row, columns - 1 - column, rows - 1 - row);
  // Where heights end, the shade runs out instead of ending in a line.
  const fadeCells = Math.max(1, Math.min(columns, rows) * 0.08);
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      const own = cells[row * columns + column]!;
      if (Number.isNaN(own)) continue;
      const h = (dColumn: number, dRow: number) => at(column + dColumn, row + dRow, own);
      const eastward = (h(1, -1) + 2 * h(1, 0) + h(1, 1) - h(-1, -1) - 2 * h(-1, 0) - h(-1, 1)) / (8 * cellSizeM);
      const southward = (h(-1, 1) + 2 * h(0, 1) + h(1, 1) - h(-1, -1) - 2 * h(0, -1) - h(1, -1)) / (8 * cellSizeM);
      const slope = Math.atan(exaggeration * Math.hypot(eastward, southward));
      const aspect = Math.atan2(southward, -eastward);
      const lit = Math.cos(zenith) * Math.cos(slope) + Math.sin(zenith) * Math.sin(slope) * Math.cos(azimuth - aspect);
      const difference = lit - level;
      const colour = difference < 0 ? dark : bright;
      const pixel = (row * columns + column) * 4;
      pixels[pixel] = colour[0];
      pixels[pixel + 1] = colour[1];
      pixels[pixel + 2] = colour[2];
      pixels[pixel + 3] = 255 * Math.min(strongest, Math.abs(difference) * 2.4) * Math.min(1, edgeDistance(column, row) / fadeCells);
    }
  }
  return pixels;
}
