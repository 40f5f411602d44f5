/** A picture in RGBA, as a canvas gives it. */
export interface Picture {
  readonly width: number;
  readonly height: number;
  readonly data: Uint8ClampedArray;
}

interface Point {
  readonly x: number;
  readonly y: number;
}

/** Middles of the three squares in the corners of a code, in the picture. */
export interface CornerSquares {
  readonly tl: Point;
  readonly tr: Point;
  readonly bl: Point;
}

/** Our labels: version 1 (ISO/IEC 18004) is 21 modules wide, the middles of its corner squares 14 apart. */
const modules = 21;
const firstMiddle = 3.5;
const between = 14;

/**
 * The code looked at from straight above, for a phone that was held at a slant. A flat code in perspective is known by the
 * middles of its three corner squares and by how much further the right and the lower ones are (`right`, `down`); these two
 * are tried, and kept where the modules that every such code has (corner squares and the dotted lines between them) fit
 * the picture best. Returns null where nothing fits.
 */
export function straightened(picture: Picture, corners: CornerSquares): Picture | null {
  const { tl, tr, bl } = corners;
  let best: Fit | null = null;
  // At a slant the square in the middle of the three is not always told by its angle.
  for (const squares of [{ tl, tr, bl }, { tl: tr, tr: bl, bl: tl }, { tl: bl, tr: tl, bl: tr }]) {
    const fit = bestSlant(picture, squares);
    if (best === null || fit.likeness > best.likeness) best = fit;
  }
  return best !== null && best.likeness > leastLikeness ? drawn(picture, settled(picture, best)) : null;
}

/** Correlation of what is seen with what every code has; strangers stay far below. */
const leastLikeness = 0.6;

interface Slant {
  readonly squares: CornerSquares;
  /** By how much of its own distance the right and the lower square are further off than the upper left one. */
  readonly right: number;
  readonly down: number;
}

interface Fit extends Slant {
  readonly likeness: number;
  readonly cut: number;
}

/** From a coarse look at all slants to a finer one at the best. */
function bestSlant(picture: Picture, squares: CornerSquares): Fit {
  let best = look(picture, { squares, right: 0, down: 0 }, middles);
  for (const { reach, step } of [{ reach: 0.48, step: 0.08 }, { reach: 0.06, step: 0.02 }]) {
    const middle = best;
    const steps = Math.round(reach / step);
    for (let right = -steps; right <= steps; right++) {
      for (let down = -steps; down <= steps; down++) {
        const fit = look(picture, { squares, right: middle.right + right * step, down: middle.down + down * step }, middles);
        if (fit.likeness > best.likeness) best = fit;
      }
    }
  }
  return best;
}

/** Middles of squares are found to a pixel, which is a module at the far corner: all eight figures are moved as long as the picture fits better. */
function settled(picture: Picture, coarse: Fit): Fit {
  const at = (figures: readonly number[]) => look(picture, slantOf(figures), quarters);
  const { tl, tr, bl } = coarse.squares;
  let figures = [tl.x, tl.y, tr.x, tr.y, bl.x, bl.y, coarse.right, coarse.down];
  let best = at(figures);
  const sidePx = Math.hypot(tr.x - tl.x, tr.y - tl.y) / between;
  for (let step = sidePx / 4; step > sidePx / 40; ) {
    const before = best.likeness;
    for (let figure = 0; figure < figures.length; figure++) {
      for (const way of [-1, 1]) {
        const moved = figures.slice();
        moved[figure]! += way * (figure < 6 ? step : step / sidePx / 10);
        const fit = at(moved);
        if (fit.likeness > best.likeness) [best, figures] = [fit, moved];
      }
    }
    if (best.likeness - before < 1e-5) step /= 2;
  }
  return best;
}

function slantOf([x1, y1, x2, y2, x3, y3, right, down]: readonly number[]): Slant {
  return { squares: { tl: { x: x1!, y: y1! }, tr: { x: x2!, y: y2! }, bl: { x: x3!, y: y3! } }, right: right!, down: down! };
}

/** Where a place of the code (in modules) lies in the picture. */
function placeOf({ squares: { tl, tr, bl }, right, down }: Slant, column: number, row: number): Point {
  const [across, along] = [(column - firstMiddle) / between, (row - firstMiddle) / between];
  const depth = 1 + right * across + down * along;
  const on = (axis: 'x' | 'y') => (tl[axis] + across * ((1 + right) * tr[axis] - tl[axis]) + along * ((1 + down) * bl[axis] - tl[axis])) / depth;
  return { x: on('x'), y: on('y') };
}

interface KnownPlace {
  /** Counted in distances between corner squares from the middle of the upper left one. */
  readonly across: number;
  readonly along: number;
  readonly isDark: boolean;
}

/** Places whose shade every code of this size has: in corner squares with their light edge, and in the dotted lines between them. */
function knownPlaces(within: readonly number[]): readonly KnownPlace[] {
  const list: KnownPlace[] = [];
  const add = (column: number, row: number, isDark: boolean) => {
    for (const right of within) for (const down of within) list.push({ across: (column + right - firstMiddle) / between, along: (row + down - firstMiddle) / between, isDark });
  };
  for (const [left, top] of [[0, 0], [between, 0], [0, between]] as const) {
    for (let row = -1; row <= 7; row++) {
      for (let column = -1; column <= 7; column++) {
        const ring = Math.max(Math.abs(column - 3), Math.abs(row - 3));
        add(left + column, top + row, ring !== 2 && ring !== 4);
      }
    }
  }
  for (let place = 8; place < between - 1; place++) {
    add(place, 6, place % 2 === 0);
    add(6, place, place % 2 === 0);
  }
  return list;
}

const middles = knownPlaces([0.5]);
/** Near the edges of modules, where a shift by a part of one shows. */
const quarters = knownPlaces([0.15, 0.85]);

/** How far light and dark lie where they must, 1 at best, and the brightness between the two. */
function look(picture: Picture, slant: Slant, known: readonly KnownPlace[]): Fit {
  const { tl, tr, bl } = slant.squares;
  const [right, down] = [slant.right, slant.down];
  const [acrossX, acrossY] = [(1 + right) * tr.x - tl.x, (1 + right) * tr.y - tl.y];
  const [alongX, alongY] = [(1 + down) * bl.x - tl.x, (1 + down) * bl.y - tl.y];
  let [darkSum, lightSum, squares, darkCount] = [0, 0, 0, 0];
  for (const { across, along, isDark } of known) {
    const depth = 1 + right * across + down * along;
    const light = lightAt(picture, (tl.x + across * acrossX + along * alongX) / depth, (tl.y + across * acrossY + along * alongY) / depth);
    squares += light * light;
    if (isDark) darkSum += light;
    else lightSum += light;
    if (isDark) darkCount += 1;
  }
  const [n, lightCount] = [known.length, known.length - darkCount];
  const spread = squares / n - ((darkSum + lightSum) / n) ** 2;
  const [dark, light] = [darkSum / darkCount, lightSum / lightCount];
  // The correlation of what is seen with what must be.
  const likeness = spread > 0 ? ((light - dark) * Math.sqrt((darkCount * lightCount) / (n * n))) / Math.sqrt(spread) : -1;
  return { ...slant, likeness, cut: (dark + light) / 2 };
}

/** Brightness between the pixels, 0 to 255 (the green of a pixel stands for it); outside the picture as at its edge. */
function lightAt({ width, height, data }: Picture, x: number, y: number): number {
  const [left, top] = [Math.min(width - 2, Math.max(0, Math.floor(x - 0.5))), Math.min(height - 2, Math.max(0, Math.floor(y - 0.5)))];
  const [right, down] = [Math.min(1, Math.max(0, x - 0.5 - left)), Math.min(1, Math.max(0, y - 0.5 - top))];
  const at = (top * width + left) * 4 + 1;
  const upper = data[at]! * (1 - right) + data[at + 4]! * right;
  const lower = data[at + width * 4]! * (1 - right) + data[at + width * 4 + 4]! * right;
  return upper * (1 - down) + lower * down;
}

/** The code in black and white with its quiet edge of four modules, as a reader likes it best. */
function drawn(picture: Picture, fit: Fit): Picture {
  const [modulePx, edge] = [4, 4];
  const side = (modules + 2 * edge) * modulePx;
  const data = new Uint8ClampedArray(side * side * 4).fill(255);
  for (let row = 0; row < modules; row++) {
    for (let column = 0; column < modules; column++) {
      if (lightOf(picture, fit, { column, row }) > fit.cut) continue;
      for (let line = 0; line < modulePx; line++) {
        const start = (((row + edge) * modulePx + line) * side + (column + edge) * modulePx) * 4;
        data.fill(0, start, start + modulePx * 4);
      }
    }
  }
  return { width: side, height: side, data };
}

/** Mean brightness of the middle of a module, so that noise and a blurred edge count less. */
function lightOf(picture: Picture, fit: Fit, { column, row }: { column: number; row: number }): number {
  let sum = 0;
  for (const down of [0.3, 0.5, 0.7]) for (const right of [0.3, 0.5, 0.7]) {
    const { x, y } = placeOf(fit, column + right, row + down);
    sum += lightAt(picture, x, y);
  }
  return sum / 9;
}
