// @vitest-environment node
import { decodeQR } from 'qr/decode.js';
import { beforeAll, describe, expect, it } from 'vitest';
import { labelSheet } from '../../server/exporters/labelSheet.ts';
import { labelCode, readLabelCode } from '../../shared/field/labelCode.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { codesIn } from '../../src/lib/codeReader.ts';
import { straightened } from '../../src/lib/slantedCode.ts';
import { readPdf, type PdfPage } from '../core/pdfText.ts';

interface Photo {
  modulePx: number;
  /** Turned by so many degrees. */
  turn?: number;
  /** Standard deviation of the noise, of 255. */
  noise?: number;
  /** Dark and light of the print in this light, of 255. */
  tones?: [number, number];
  /** Degrees by which the phone is tilted, about an axis turned by `axis` degrees, two and a half code widths away. */
  tilt?: number;
  axis?: number;
  /** A crease or a drop over the code: this share of its side, in the middle, is light. */
  blotch?: number;
}

let squares: PdfPage['fills'];
const code = labelCode(1_234_567);

const sinCos = (degrees: number): [number, number] => [Math.sin((degrees * Math.PI) / 180), Math.cos((degrees * Math.PI) / 180)];

/** A photo of the printed label as the camera's pixels, four samples a pixel. */
function photograph({ modulePx, turn = 0, noise = 0, tones = [30, 225], tilt = 0, axis = 0, blotch = 0 }: Photo): { width: number; height: number; data: Uint8ClampedArray } {
  const [left, top] = [Math.min(...squares.map(({ x }) => x)), Math.min(...squares.map(({ y }) => y))];
  const side = Math.max(...squares.map(({ x }) => x)) + 1 - left;
  const isDark = new Set(squares.map(({ x, y }) => `${Math.round(x - left)} ${Math.round(y - top)}`));
  const [width, height] = [640, 480];
  const data = new Uint8ClampedArray(width * height * 4).fill(255);
  const [sin, cos] = sinCos(turn);
  const [sinTilt, cosTilt] = sinCos(tilt);
  const [sinAxis, cosAxis] = sinCos(axis);
  const away = 2.5 * side;
  const random = seededRandom(7);
  const shade = (px: number, py: number): number => {
    const [x, y] = [(px - width / 2) / modulePx, (py - height / 2) / modulePx];
    // Where the ray through this pixel meets the label: along the axis, and up the tilted plane.
    const [along, up] = [x * cosAxis + y * sinAxis, -x * sinAxis + y * cosAxis];
    const reach = (away * cosTilt) / (up * sinTilt + away * cosTilt);
    const onPlane = reach * up * cosTilt - (reach - 1) * away * sinTilt;
    const [dx, dy] = [reach * along * cosAxis - onPlane * sinAxis, reach * along * sinAxis + onPlane * cosAxis];
    const [column, row] = [dx * cos + dy * sin + side / 2, -dx * sin + dy * cos + side / 2];
    const isBlotted = Math.hypot(column - side / 2, row - side / 2) < (blotch * side) / 2;
    return !isBlotted && isDark.has(`${Math.floor(column)} ${Math.floor(row)}`) ? tones[0] : tones[1];
  };
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const mean = (shade(x + 0.25, y + 0.25) + shade(x + 0.75, y + 0.25) + shade(x + 0.25, y + 0.75) + shade(x + 0.75, y + 0.75)) / 4;
      data.fill(mean + noise * randomNormal(random), (y * width + x) * 4, (y * width + x) * 4 + 3);
    }
  }
  return { width, height, data };
}

beforeAll(async () => {
  const [page] = readPdf(await labelSheet([{ code, facts: null }], { paper: 'single', language: 'en', title: 'Label' }));
  squares = page!.fills.filter(({ width, height }) => width === 1 && height === 1);
});

describe('a label of our own, seen by a camera without a reader of the browser', () => {
  const seen = (photo: Photo) => codesIn(photograph(photo), { decodeQR, straightened });

  it('has the modules that a code of six letters at level H has', () => {
    // ISO/IEC 18004: version 1 is 21 modules wide, and about half of them are dark.
    expect(Math.max(...squares.map(({ x }) => x)) - Math.min(...squares.map(({ x }) => x)) + 1).toBe(21);
    expect(squares.length).toBeGreaterThan(150);
    expect(squares.length).toBeLessThan(300);
  });

  it('is read straight, from near and from afar', () => {
    for (const modulePx of [3, 6, 15]) expect(seen({ modulePx })).toEqual([code]);
  });

  it('is read at every turn', () => {
    for (let turn = 0; turn < 360; turn += 20) expect([turn, ...seen({ modulePx: 7, turn })]).toEqual([turn, code]);
  });

  it('is read in noise, in poor light, a little askew and through a crease', () => {
    expect(seen({ modulePx: 8, turn: 12, noise: 25 })).toEqual([code]);
    expect(seen({ modulePx: 8, turn: 200, noise: 8, tones: [70, 120] })).toEqual([code]);
    expect(seen({ modulePx: 9, turn: 33, noise: 10, tilt: 12, axis: 20 })).toEqual([code]);
    expect(seen({ modulePx: 9, turn: 5, noise: 10, blotch: 0.2 })).toEqual([code]);
  });

  it('is read from a phone held at a slant, about any axis, where the reader alone reads none of them', () => {
    const slants = [20, 35, 45].flatMap((tilt) => [0, 90, 135].flatMap((axis) => [0, 40, 200].map((turn): Photo => ({ modulePx: 9, tilt, axis, turn, noise: 8 }))));
    const [alone, read]: [Photo[], Photo[]] = [[], []];
    for (const slant of slants) {
      const picture = photograph(slant);
      if (codesIn(picture, { decodeQR, straightened: () => null }).length > 0) alone.push(slant);
      const found = codesIn(picture, { decodeQR, straightened });
      if (found.length > 0) read.push(slant);
      expect(found.every((text) => text === code)).toBe(true);
    }
    expect(alone.length).toBeLessThan(3);
    // The camera looks eight times a second with a hand that moves: nine of ten is more than enough.
    expect(read.length / slants.length).toBeGreaterThan(0.88);
  });

  it('is never read as another label: what is too blurred says nothing', () => {
    for (const noise of [60, 90, 120, 150, 200]) {
      for (const found of seen({ modulePx: 4, turn: 17, noise })) expect(readLabelCode(found)).toEqual({ code });
    }
    expect(codesIn({ width: 64, height: 64, data: new Uint8ClampedArray(64 * 64 * 4).fill(200) }, { decodeQR, straightened })).toEqual([]);
  });
});
