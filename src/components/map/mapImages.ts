import type { Map as MlMap } from 'maplibre-gl';
import { zoneStyle, type ColourSet } from '../../lib/colours.ts';
import { patternTile } from '../../lib/zonePatterns.ts';

/** Images drawn on the device: zone patterns, number pills, flags, point marks. Names say what they hold. */

export interface ImageInk {
  readonly pill: string;
  readonly pillInk: string;
  readonly pillLine: string;
  readonly brick: string;
  readonly brickSoft: string;
  readonly mark: string;
  readonly ink: string;
  readonly sheet: string;
  readonly moss: string;
}

const ratio = 2;
const font = (weight: number, px: number) => `${weight} ${px}px 'Open Sans', sans-serif`;

type Draw = (pen: CanvasRenderingContext2D) => void;

function put(map: MlMap, name: string, { width, height, draw }: { width: number; height: number; draw: Draw }): void {
  const canvas = document.createElement('canvas');
  canvas.width = Math.round(width * ratio);
  canvas.height = Math.round(height * ratio);
  const pen = canvas.getContext('2d', { willReadFrequently: true });
  if (!pen) return;
  pen.scale(ratio, ratio);
  draw(pen);
  const image = pen.getImageData(0, 0, canvas.width, canvas.height);
  if (map.hasImage(name)) map.removeImage(name);
  map.addImage(name, image, { pixelRatio: ratio });
}

interface ZoneLook {
  readonly zone: number;
  readonly set?: ColourSet;
  readonly count: number;
  readonly colour?: string | null;
}

export function patternName({ zone, set = 'ordered', count, colour = null }: ZoneLook): string {
  return `zone-${set}-${Math.min(6, count)}-${zone}${colour ?? ''}`;
}

export function addZonePattern(map: MlMap, look: ZoneLook): void {
  const name = patternName(look);
  if (map.hasImage(name)) return;
  const { zone, set, count, colour } = look;
  const tile = patternTile({ ...zoneStyle(zone, { set, count, own: colour ? { [zone]: colour } : {} }), ratio });
  const image = tile?.getContext('2d')?.getImageData(0, 0, tile.width, tile.height);
  if (image) map.addImage(name, image, { pixelRatio: ratio });
}

/** Number on a white pill, 20 × 17. */
export function addPill(map: MlMap, text: string, ink: ImageInk): void {
  const width = Math.max(20, 10 + text.length * 8);
  put(map, `pill-${text}`, { width: width + 1.5, height: 18.5, draw: (pen) => {
    pen.fillStyle = ink.pill;
    pen.strokeStyle = ink.pillLine;
    pen.lineWidth = 1.5;
    pen.beginPath();
    pen.roundRect(0.75, 0.75, width, 17, 4);
    pen.fill();
    pen.stroke();
    write(pen, text, { x: width / 2 + 0.75, y: 9.6, colour: ink.pillInk, face: font(700, 12) });
  } });
}

/** Lettered flag at the corner of a placing. */
export function addFlag(map: MlMap, letter: string, colour: string): void {
  put(map, `flag-${letter}-${colour}`, { width: 20, height: 17, draw: (pen) => {
    pen.fillStyle = colour;
    pen.fillRect(0, 0, 20, 17);
    write(pen, letter, { x: 10, y: 8.9, colour: '#FFFFFF', face: font(700, 12) });
  } });
}

/** 9 px back-diagonal of brick on soft brick. */
export function addRestriction(map: MlMap, ink: ImageInk): void {
  put(map, 'restriction', { width: 9, height: 9, draw: (pen) => {
    pen.globalAlpha = 0.55;
    pen.fillStyle = ink.brickSoft;
    pen.fillRect(0, 0, 9, 9);
    pen.globalAlpha = 1;
    pen.strokeStyle = ink.brick;
    pen.lineWidth = 2.4;
    pen.stroke(new Path2D('M-2 -2L11 11M-2 7L2 11M7 -2L11 2'));
  } });
}

/** Light hatch over the zones' own patterns: here another zone fits nearly as well. */
export function addDoubt(map: MlMap, ink: ImageInk): void {
  put(map, 'doubt', { width: 8, height: 8, draw: (pen) => {
    pen.strokeStyle = ink.sheet;
    pen.lineWidth = 3.2;
    pen.stroke(new Path2D('M-2 -2L10 10M-2 6L2 10M6 -2L10 2'));
    pen.strokeStyle = ink.ink;
    pen.lineWidth = 1.2;
    pen.stroke(new Path2D('M-2 -2L10 10M-2 6L2 10M6 -2L10 2'));
  } });
}

export function addPointMarks(map: MlMap, ink: ImageInk): void {
  const square = (fill: string, size: number): Draw => (pen) => {
    pen.fillStyle = fill;
    pen.strokeStyle = ink.ink;
    pen.lineWidth = 2;
    pen.fillRect(2, 2, size, size);
    pen.strokeRect(2, 2, size, size);
  };
  put(map, 'point-target', { width: 15, height: 15, draw: square(ink.mark, 11) });
  put(map, 'point-done', { width: 15, height: 15, draw: square(ink.moss, 11) });
  put(map, 'point-reading', { width: 11, height: 11, draw: square(ink.sheet, 7) });
  put(map, 'point-reserve', { width: 13, height: 13, draw: (pen) => {
    pen.strokeStyle = ink.ink;
    pen.lineWidth = 1.5;
    pen.setLineDash([2, 2]);
    pen.strokeRect(2, 2, 9, 9);
  } });
  put(map, 'point-gate', { width: 20, height: 18, draw: (pen) => {
    pen.strokeStyle = ink.ink;
    pen.lineWidth = 2;
    pen.fillStyle = ink.sheet;
    pen.fillRect(1, 1, 18, 16);
    pen.stroke(new Path2D('M3 2V16M17 2V16M3 6H17M3 12H17M4 11.5L16 6.5'));
  } });
  put(map, 'point-estate', { width: 25, height: 25, draw: (pen) => {
    pen.strokeStyle = ink.ink;
    pen.fillStyle = ink.sheet;
    pen.lineWidth = 2;
    pen.stroke(new Path2D('M12.5 0V25M0 12.5H25'));
    pen.fillRect(8, 8, 9, 9);
    pen.strokeRect(8, 8, 9, 9);
  } });
}

function write(pen: CanvasRenderingContext2D, text: string, { x, y, colour, face }: { x: number; y: number; colour: string; face: string }): void {
  pen.font = face;
  pen.fillStyle = colour;
  pen.textAlign = 'center';
  pen.textBaseline = 'middle';
  pen.fillText(text, x, y);
}
