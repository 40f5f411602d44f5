import type { PixelTransform } from '../understood.ts';
import type { GeoTags } from './geoTags.ts';

/** Where the pixels lie, or why nobody can tell. */
export type Placement =
  | { kind: 'placed'; transform: PixelTransform; note: 'negative-scale' | 'corner-points' | null; isPoint: boolean }
  | { kind: 'unplaced'; reason: 'none' | 'control-points' | 'degenerate' };

/**
 * Six numbers from the tags, for pixel corners. Where the file says that its coordinates mean pixel centres
 * (RasterPixelIsPoint, GeoTIFF 1.1 §7.1.2), the corner lies half a pixel before.
 */
export function placementOf(tags: GeoTags): Placement {
  const isPoint = tags.geoKeys?.['GTRasterTypeGeoKey'] === 2;
  const found = fromTags(tags);
  if (found.kind === 'unplaced' || !isPoint) return found;
  return { ...found, transform: halfPixelBack(found.transform), isPoint: true };
}

function fromTags({ pixelScale, tiePoints, transformation }: GeoTags): Placement {
  if (transformation !== null && transformation.length >= 8) {
    const [a, b, , x, c, d, , y] = transformation as [number, number, number, number, number, number, number, number];
    return placed([x, a, b, y, c, d], null);
  }
  if (pixelScale !== null && pixelScale.length >= 2 && tiePoints !== null && tiePoints.length >= 6) {
    const [column, row, , x, y] = tiePoints as [number, number, number, number, number];
    const [scaleX, scaleY] = pixelScale as [number, number];
    // Writers that give a negative height mean a picture with north up all the same; the reference reader agrees.
    const down = Math.abs(scaleY);
    return placed([x - column * scaleX, scaleX, 0, y + row * down, 0, -down], scaleY < 0 ? 'negative-scale' : null);
  }
  if (tiePoints !== null && tiePoints.length >= 18) return fromCorners(tiePoints);
  return { kind: 'unplaced', reason: tiePoints !== null && tiePoints.length >= 6 ? 'control-points' : 'none' };
}

function placed(transform: PixelTransform, note: 'negative-scale' | 'corner-points' | null): Placement {
  const [, a, b, , c, d] = transform;
  const area = Math.abs(a * d - b * c);
  if (!transform.every(Number.isFinite) || !(area > 0)) return { kind: 'unplaced', reason: 'degenerate' };
  return { kind: 'placed', transform, note, isPoint: false };
}

/** Control points that lie on one plane exactly (corners of the picture) place it as six numbers do; others do not. */
function fromCorners(tiePoints: readonly number[]): Placement {
  const points = Array.from({ length: Math.floor(tiePoints.length / 6) }, (_, i) => tiePoints.slice(i * 6, i * 6 + 5));
  const [first, second, third] = [points[0]!, ...points.slice(1)] as number[][];
  const far = points.slice(1).find((point) => Math.abs(cross(first!, second!, point)) > 1);
  if (far === undefined || third === undefined) return { kind: 'unplaced', reason: 'control-points' };
  const solve = (index: 3 | 4): [number, number, number] => {
    const area = cross(first!, second!, far);
    const [du1, dv1, dw1] = [second![0]! - first![0]!, second![1]! - first![1]!, second![index]! - first![index]!];
    const [du2, dv2, dw2] = [far[0]! - first![0]!, far[1]! - first![1]!, far[index]! - first![index]!];
    const perColumn = (dw1 * dv2 - dw2 * dv1) / area;
    const perRow = (du1 * dw2 - du2 * dw1) / area;
    return [first![index]! - perColumn * first![0]! - perRow * first![1]!, perColumn, perRow];
  };
  const transform: PixelTransform = [...solve(3), ...solve(4)];
  const pixel = Math.sqrt(Math.abs(transform[1] * transform[5] - transform[2] * transform[4]));
  const isPlane = points.every(([u, v, , x, y]) => Math.hypot(transform[0] + transform[1] * u! + transform[2] * v! - x!, transform[3] + transform[4] * u! + transform[5] * v! - y!) < 0.02 * pixel);
  return isPlane ? placed(transform, 'corner-points') : { kind: 'unplaced', reason: 'control-points' };
}

function cross(a: readonly number[], b: readonly number[], c: readonly number[]): number {
  return (b[0]! - a[0]!) * (c[1]! - a[1]!) - (c[0]! - a[0]!) * (b[1]! - a[1]!);
}

/**
 * Six lines of a world file (.tfw): A, D, B, E, C, F, where C and F are the CENTRE of the first pixel (ESRI convention).
 * Null when the text is not six numbers.
 */
export function worldFileTransform(text: string): PixelTransform | null {
  const numbers = text.trim().split(/\s+/).map((part) => Number(part.replace(',', '.')));
  if (numbers.length < 6 || numbers.slice(0, 6).some((value) => !Number.isFinite(value))) return null;
  const [a, d, b, e, c, f] = numbers as [number, number, number, number, number, number];
  return a * e - b * d === 0 ? null : halfPixelBack([c, a, b, f, d, e]);
}

function halfPixelBack([x, a, b, y, c, d]: PixelTransform): PixelTransform {
  return [x - (a + b) / 2, a, b, y - (c + d) / 2, c, d];
}

/** Corners of the picture in its own coordinates, counter-clockwise from the lower left of an upright picture, `steps` to a side. */
export function outlineOf(transform: PixelTransform, size: { width: number; height: number }, steps = 4): [number, number][] {
  const { width, height } = size;
  const corners = [[0, height], [width, height], [width, 0], [0, 0], [0, height]] as const;
  const out: [number, number][] = [];
  for (let side = 0; side < 4; side++) {
    const [from, to] = [corners[side]!, corners[side + 1]!];
    for (let step = 0; step < steps; step++) {
      const u = from[0] + ((to[0] - from[0]) * step) / steps;
      const v = from[1] + ((to[1] - from[1]) * step) / steps;
      out.push(at(transform, u, v));
    }
  }
  out.push(at(transform, 0, height));
  return out;
}

export function at([x, a, b, y, c, d]: PixelTransform, u: number, v: number): [number, number] {
  return [x + a * u + b * v, y + c * u + d * v];
}
