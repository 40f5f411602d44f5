import type { RampName } from '../../shared/catalog/layerTypes.ts';
import { channels, classColour, rampColour } from './colours.ts';

export interface CellGrid {
  readonly cells: ArrayLike<number>;
  readonly columns: number;
  readonly rows: number;
  readonly ramp: RampName;
  readonly range: readonly [low: number, high: number];
  /** How much of its colour each cell has, 0…1, the rest being `paleGrey`; all of it when not given. */
  readonly strength?: ArrayLike<number>;
  /** Colours that people gave classes, by class number. */
  readonly own?: Readonly<Record<number, string>>;
}

/** What colours fade to where they are uncertain: no theme's ground, in which the darkest or the lightest of them would be lost. */
export const paleGrey = '#ADADA8';

const shades = 256;

/** Cells as RGBA pixels: ramp colours between the two ends of the range, class colours for classes; NaN stays clear. */
export function cellPixels({ cells, columns, rows, ramp, range: [low, high], own, strength }: CellGrid): Uint8ClampedArray<ArrayBuffer> {
  const pixels = new Uint8ClampedArray(columns * rows * 4);
  const table = Array.from({ length: shades }, (_, shade) => rampColour(ramp, shade / (shades - 1)));
  const grey = channels(paleGrey);
  const span = high > low ? high - low : 1;
  for (let cell = 0; cell < columns * rows; cell++) {
    const value = cells[cell]!;
    if (Number.isNaN(value)) continue;
    const height = Math.min(1, Math.max(0, (value - low) / span));
    const colour = ramp === 'classes' ? channels(classColour(value, own)) : table[Math.round(height * (shades - 1))]!;
    const share = strength?.[cell] ?? 1;
    const mixed = (part: 0 | 1 | 2) => grey[part] + (colour[part] - grey[part]) * share;
    pixels.set([mixed(0), mixed(1), mixed(2), 255], cell * 4);
  }
  return pixels;
}

/** Pixels as a data address for an image on the map; null where there is no canvas. */
export function pixelsToUrl(pixels: Uint8ClampedArray<ArrayBuffer>, columns: number, rows: number): string | null {
  const canvas = document.createElement('canvas');
  canvas.width = columns;
  canvas.height = rows;
  const pen = canvas.getContext('2d');
  if (!pen) return null;
  pen.putImageData(new ImageData(pixels, columns, rows), 0, 0);
  return canvas.toDataURL('image/png');
}
