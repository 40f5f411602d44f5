import type { Pattern } from './colours.ts';

/** The zone patterns as strokes on a tile of 8 px that repeats without a seam; one source for SVG, canvas and map. */
const patternTilePx = 8;

export const patternPaths: Readonly<Record<Pattern, string>> = {
  plain: '',
  diagonal: 'M-2 2L2 -2M0 8L8 0M6 10L10 6',
  dots: 'M1.2 2h1.6M5.2 6h1.6',
  cross: 'M0 4H8M4 0V8',
  backDiagonal: 'M-2 6L2 10M0 0L8 8M6 -2L10 2',
  horizontal: 'M0 2H8M0 6H8',
};

/** Stroke width of a pattern: dots are short thick strokes. */
export function patternStroke(pattern: Pattern): number {
  return pattern === 'dots' ? 1.6 : 1;
}

export const patternOpacity = 0.65;

/** The tile drawn at `ratio` device pixels; null where there is no canvas. */
export function patternTile({ fill, pattern, mark, ratio }: { fill: string; pattern: Pattern; mark: string; ratio: number }): HTMLCanvasElement | null {
  const tile = document.createElement('canvas');
  tile.width = tile.height = patternTilePx * ratio;
  const pen = tile.getContext('2d');
  if (!pen) return null;
  pen.scale(ratio, ratio);
  pen.fillStyle = fill;
  pen.fillRect(0, 0, patternTilePx, patternTilePx);
  pen.globalAlpha = patternOpacity;
  pen.strokeStyle = mark;
  pen.lineWidth = patternStroke(pattern);
  pen.stroke(new Path2D(patternPaths[pattern]));
  return tile;
}
