import { describe, expect, it } from 'vitest';
import { randomIndex, seededRandom } from '../../shared/analysis/random.ts';
import { traceBorders, type Border } from '../../shared/analysis/polygoniseTrace.ts';
import { simplifyBorders } from '../../shared/analysis/simplifyBorders.ts';
import { picture } from './pictures.ts';

/** Labels with a rim of empty ground, as tracing wants them. */
const extended = (text: string) => {
  const { labels, cols, rows } = picture(text);
  const out = new Uint8Array((cols + 2) * (rows + 2));
  for (let row = 0; row < rows; row++) out.set(labels.subarray(row * cols, (row + 1) * cols), (row + 1) * (cols + 2) + 1);
  return { labels: out, cols: cols + 2, rows: rows + 2 };
};
const simplified = (source: { cols: number; rows: number }, borders: readonly Border[], areaCells: number) => simplifyBorders(borders, { areaCells, width: 2 * source.cols + 1, height: 2 * source.rows + 1 });
const pointsOf = ({ points }: Border) => Array.from({ length: points.length / 2 }, (_, at) => [points[2 * at]!, points[2 * at + 1]!] as const);

type Segment = readonly [readonly [number, number], readonly [number, number]];
const segmentsOf = (border: Border): Segment[] => {
  const points = pointsOf(border);
  const closed = border.isLoop ? [...points, points[0]!] : points;
  return closed.slice(1).map((point, at) => [closed[at]!, point] as const);
};
const turn = ([ax, ay]: readonly [number, number], [bx, by]: readonly [number, number], [cx, cy]: readonly [number, number]) => Math.sign((bx - ax) * (cy - ay) - (cx - ax) * (by - ay));

/** True when two segments share anything but a common end. */
function meets([a, b]: Segment, [c, d]: Segment): boolean {
  const same = (p: readonly [number, number], q: readonly [number, number]) => p[0] === q[0] && p[1] === q[1];
  const within = (p: readonly [number, number], [q, r]: Segment) => turn(q, r, p) === 0 && (p[0] - q[0]) * (p[0] - r[0]) <= 0 && (p[1] - q[1]) * (p[1] - r[1]) <= 0;
  if (turn(a, b, c) * turn(a, b, d) < 0 && turn(c, d, a) * turn(c, d, b) < 0) return true;
  const touching = [a, b].filter((end) => within(end, [c, d]) && !same(end, c) && !same(end, d)).length + [c, d].filter((end) => within(end, [a, b]) && !same(end, a) && !same(end, b)).length;
  return touching > 0 || (same(a, c) && same(b, d)) || (same(a, d) && same(b, c));
}

describe('tracing borders', () => {
  it('follows each border once, from place to place where three zones meet', () => {
    const borders = traceBorders(extended('1122 1122 3333'));
    expect(borders.map(({ left, right, isLoop }) => [Math.min(left, right), Math.max(left, right), isLoop]).sort()).toEqual([[1, 2, false], [1, 3, false], [2, 3, false]]);
  });

  it('knows which zone lies to the left', () => {
    // Two columns: walking south along the border, the eastern zone is to the left.
    const [border] = traceBorders(extended('12 12'));
    const points = pointsOf(border!);
    const goesSouth = points[points.length - 1]![1] > points[0]![1];
    expect([border!.left, border!.right]).toEqual(goesSouth ? [2, 1] : [1, 2]);
  });

  it('closes a loop around an island', () => {
    const [border, ...others] = traceBorders(extended('111 121 111'));
    expect(others).toEqual([]);
    expect(border!.isLoop).toBe(true);
    expect(pointsOf(border!).length).toBe(4);
  });

  it('joins the lower label where two zones meet cross-wise', () => {
    const borders = traceBorders(extended('12 21'));
    // Two borders pass the corner: 1 is one zone, the two cells of 2 lie apart.
    expect(borders.length).toBe(2);
    for (const border of borders) expect(pointsOf(border).some(([u, v]) => u === 4 && v === 4)).toBe(false);
  });
});

describe('straightening borders', () => {
  it('turns stairs into a line, and keeps corners that enclose more than the limit', () => {
    const source = extended('1222222 1122222 1112222 1111222 1111122 1111112');
    const [line] = simplified(source, traceBorders(source), 0);
    expect(pointsOf(line!).length).toBeLessThanOrEqual(4);
    const corner = extended('11111111 11111111 11111111 22221111 22221111 22221111');
    const [bent] = simplified(corner, traceBorders(corner), 0.5);
    expect(pointsOf(bent!).length).toBeGreaterThanOrEqual(3);
  });

  it('keeps the ends of borders, and four points of a loop whatever the limit', () => {
    const source = extended('1111111 1222221 1233321 1233321 1222221 1111111');
    const borders = traceBorders(source);
    const straight = simplified(source, borders, 1000);
    straight.forEach((border) => expect(pointsOf(border).length).toBe(4));
    const open = extended('1122 1122 3333');
    const before = traceBorders(open);
    simplified(open, before, 1000).forEach((border, at) => {
      const [kept, old] = [pointsOf(border), pointsOf(before[at]!)];
      expect([kept[0], kept[kept.length - 1]]).toEqual([old[0], old[old.length - 1]]);
    });
  });

  it('keeps apart two borders between the same two places', () => {
    // Zone 2 is a lens between 1 and 3: its two borders have the same ends.
    const source = extended('1111111 1112111 1122211 3322233 3332333 3333333');
    const straight = simplified(source, traceBorders(source), 1000);
    const lens = straight.filter(({ left, right }) => left === 2 || right === 2);
    expect(lens.length).toBe(2);
    expect(Math.max(...lens.map((border) => pointsOf(border).length))).toBeGreaterThan(2);
  });

  it('never makes two borders touch or cross, however much is given up', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const random = seededRandom(seed);
      const [cols, rows, zones] = [6 + randomIndex(random, 8), 6 + randomIndex(random, 8), 2 + randomIndex(random, 4)];
      const text = Array.from({ length: rows }, () => Array.from({ length: cols }, () => (random() < 0.04 ? '.' : String(1 + randomIndex(random, zones)))).join('')).join(' ');
      const source = extended(text);
      for (const areaCells of [0, 1, 4, 1000]) {
        const segments = simplified(source, traceBorders(source), areaCells).flatMap(segmentsOf);
        const clashes = segments.flatMap((segment, at) => segments.slice(at + 1).filter((other) => meets(segment, other)).map((other) => ({ seed, areaCells, segment, other })));
        expect(clashes).toEqual([]);
      }
    }
  });
});
