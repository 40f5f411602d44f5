import { patternTile } from '../../lib/zonePatterns.ts';
import type { Box, RowShapes, TargetBox, ZoneBox } from './stripShapes.ts';

/** Paints the shapes of a strip on a canvas: the same picture as the SVG, for blocks of many thousand vines. */

export interface StripInk {
  readonly ground: string;
  readonly zoneLine: string;
  readonly sheet: string;
  readonly mark: string;
  readonly markInk: string;
  readonly brick: string;
  readonly muted: string;
  /** On a dark ground a hole in a dark zone needs an edge. */
  readonly holeLine: string;
}

export interface StripPicture {
  readonly rows: readonly RowShapes[];
  readonly targets: readonly TargetBox[];
  readonly reserves: readonly Box[];
  readonly ink: StripInk;
  readonly ratio: number;
}

type Pen = CanvasRenderingContext2D;

export function paintStrip(pen: Pen, { rows, targets, reserves, ink, ratio }: StripPicture): void {
  const fills = new Map<string, CanvasPattern | string>();
  pen.setTransform(ratio, 0, 0, ratio, 0, 0);
  pen.clearRect(0, 0, pen.canvas.width, pen.canvas.height);
  for (const row of rows) paintRow(pen, row, { ink, fillOf: (zone) => cached(fills, zone, () => tileFill(pen, zone, ratio)) });
  for (const box of reserves) outline(pen, box, { colour: ink.zoneLine, width: 1.5, dash: [2, 2] });
  for (const box of targets) {
    pen.fillStyle = box.target.done ? ink.ground : ink.mark;
    pen.fillRect(box.x, box.y, box.width, box.height);
    outline(pen, box, { colour: ink.markInk, width: 1.5, dash: [] });
  }
}

function cached(fills: Map<string, CanvasPattern | string>, zone: ZoneBox, make: () => CanvasPattern | string): CanvasPattern | string {
  const known = fills.get(zone.fill);
  if (known !== undefined) return known;
  const made = make();
  fills.set(zone.fill, made);
  return made;
}

function tileFill(pen: Pen, zone: ZoneBox, ratio: number): CanvasPattern | string {
  if (zone.fill === 'none') return 'transparent';
  const tile = patternTile({ ...zone, ratio });
  const pattern = tile === null ? null : pen.createPattern(tile, 'repeat');
  pattern?.setTransform(new DOMMatrix([1 / ratio, 0, 0, 1 / ratio, 0, 0]));
  return pattern ?? zone.fill;
}

interface RowPaint {
  ink: StripInk;
  fillOf: (zone: ZoneBox) => CanvasPattern | string;
}

function paintRow(pen: Pen, row: RowShapes, { ink, fillOf }: RowPaint): void {
  for (const zone of row.zones) {
    pen.fillStyle = fillOf(zone);
    pen.fillRect(zone.x, zone.y, zone.width, zone.height);
  }
  for (const box of row.doubtful) hatch(pen, box, { colour: ink.ground, step: 4, width: 1.6, lean: 1 });
  if (row.row.restricted) hatch(pen, row.outline, { colour: ink.brick, step: 9, width: 3, lean: -1 });
  pen.globalAlpha = 0.8;
  pen.lineWidth = 1;
  for (const tick of row.ticks) {
    pen.strokeStyle = tick.colour.startsWith('var') ? ink.muted : tick.colour;
    pen.stroke(new Path2D(tick.d));
  }
  pen.globalAlpha = 1;
  pen.fillStyle = ink.ground;
  for (const box of row.holes) {
    pen.fillRect(box.x, box.y, box.width, box.height);
    outline(pen, box, { colour: ink.holeLine, width: 0.8, dash: [] });
  }
  pen.globalAlpha = 0.4;
  outline(pen, row.outline, { colour: ink.zoneLine, width: 0.8, dash: [] });
  pen.globalAlpha = 1;
  pen.fillStyle = ink.zoneLine;
  for (const x of row.cuts) pen.fillRect(x - 1, row.outline.y - 1, 2, row.outline.height + 2);
  for (const post of row.posts) {
    pen.fillStyle = post.fill.startsWith('var') ? ink.sheet : post.fill;
    pen.fillRect(post.x, post.y, post.width, post.height);
    outline(pen, post, { colour: ink.zoneLine, width: 1, dash: [] });
  }
}

interface Line {
  colour: string;
  width: number;
  dash: number[];
}

function outline(pen: Pen, { x, y, width, height }: Box, line: Line): void {
  pen.strokeStyle = line.colour;
  pen.lineWidth = line.width;
  pen.setLineDash(line.dash);
  pen.strokeRect(x, y, width, height);
  pen.setLineDash([]);
}

interface Hatch {
  colour: string;
  step: number;
  width: number;
  lean: 1 | -1;
}

function hatch(pen: Pen, { x, y, width, height }: Box, { colour, step, width: lineWidth, lean }: Hatch): void {
  pen.save();
  pen.beginPath();
  pen.rect(x, y, width, height);
  pen.clip();
  pen.strokeStyle = colour;
  pen.lineWidth = lineWidth;
  pen.beginPath();
  for (let at = x - height; at < x + width + height; at += step) {
    pen.moveTo(at, lean === 1 ? y + height : y);
    pen.lineTo(at + height, lean === 1 ? y : y + height);
  }
  pen.stroke();
  pen.restore();
}
