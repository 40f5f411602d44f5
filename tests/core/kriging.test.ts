import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { krigingSystem } from '../../shared/analysis/kriging.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { inverseDistance, type ValuedPoints } from '../../shared/analysis/resamplePoints.ts';
import { surveySurface } from '../../shared/analysis/surveySurface.ts';
import { empiricalVariogram } from '../../shared/analysis/variogram.ts';
import { fitVariogram, semivariance, type VariogramModel } from '../../shared/analysis/variogramModel.ts';

const points = (...rows: readonly (readonly [number, number, number])[]): ValuedPoints => ({ x: Float64Array.from(rows, ([x]) => x), y: Float64Array.from(rows, ([, y]) => y), value: Float64Array.from(rows, ([, , value]) => value) });

describe('the semivariogram', () => {
  // By hand: squared differences of neighbours 4 1 4 4 1 4 1 make 19 / 14.
  it('of a short transect is half the mean squared difference', () => {
    const transect = points(...[3, 5, 4, 6, 8, 7, 9, 10].map((value, at): [number, number, number] => [at, 0, value]));
    const bins = empiricalVariogram(transect, { cutoffM: 3, bins: 3 });
    expect(bins.map(({ pairs }) => pairs)).toEqual([7, 6, 5]);
    expect(bins.map(({ gamma }) => gamma)).toEqual([19 / 14, 29 / 12, 4].map((gamma) => expect.closeTo(gamma, 12) as number));
  });

  // Formula of Cressie & Hawkins (1980) worked by hand: two roots of 1, one of 2 among three pairs at one metre.
  it('can be estimated so that one odd reading hardly moves it', () => {
    const [bin] = empiricalVariogram(points([0, 0, 1], [1, 0, 2], [2, 0, 1], [3, 0, 3]), { estimator: 'cressieHawkins', cutoffM: 1, bins: 1 });
    expect(bin!.gamma).toBeCloseTo(((2 + Math.SQRT2) / 3) ** 4 / (0.457 + 0.494 / 3) / 2, 12);
  });

  it('is estimated from a part of the pairs of a large survey and stays the same', () => {
    const random = seededRandom(4);
    const many = points(...Array.from({ length: 4000 }, (): [number, number, number] => [random() * 300, random() * 300, randomNormal(random)]));
    const bins = empiricalVariogram(many);
    expect(bins.length).toBeGreaterThan(5);
    for (const { gamma } of bins) expect(gamma).toBeCloseTo(1, 0.9);
  });
});

describe('models of the semivariogram', () => {
  const base = { nugget: 0.002, partialSill: 0.008 };

  // Closed forms evaluated by hand; the exponential one with its parameter, not its practical range.
  it.each([
    ['spherical', 30, [0.003981481, 0.0075, 0.01, 0.01]],
    ['exponential', 10, [0.005147755, 0.008214959, 0.009601703, 0.009911128]],
    ['smooth', 10, [0.002 + 0.008 * (1 - 1.5 * Math.exp(-0.5)), 0.002 + 0.008 * (1 - 2.5 * Math.exp(-1.5)), 0.002 + 0.008 * (1 - 4 * Math.exp(-3)), 0.002 + 0.008 * (1 - 5.5 * Math.exp(-4.5))]],
  ] as const)('%s have the values of their formula', (shape, rangeM, expected) => {
    expect([5, 15, 30, 45].map((distance) => semivariance({ ...base, shape, rangeM }, distance))).toEqual(expected.map((value) => expect.closeTo(value, 9) as number));
    expect(semivariance({ ...base, shape, rangeM }, 0)).toBe(0);
  });

  it.each([
    { shape: 'spherical', nugget: 1, partialSill: 4, rangeM: 55 },
    { shape: 'exponential', nugget: 0, partialSill: 2, rangeM: 12 },
    { shape: 'smooth', nugget: 0.5, partialSill: 2, rangeM: 12 },
  ] as const)('are found again from their own curve: $shape', (model) => {
    const bins = Array.from({ length: 15 }, (_, at) => ({ pairs: 100 + at, distanceM: 5 + 7 * at, gamma: semivariance(model, 5 + 7 * at) }));
    const fit = fitVariogram(bins)!;
    expect(fit.shape).toBe(model.shape);
    expect(fit.rangeM).toBeCloseTo(model.rangeM, 2);
    expect(fit.nugget).toBeCloseTo(model.nugget, 4);
    expect(fit.partialSill).toBeCloseTo(model.partialSill, 4);
  });

  it('never have a negative nugget or sill, and there is none where nothing varies', () => {
    expect(fitVariogram([{ pairs: 9, distanceM: 1, gamma: 3 }, { pairs: 9, distanceM: 2, gamma: 2 }, { pairs: 9, distanceM: 3, gamma: 1 }])).toMatchObject({ partialSill: 0 });
    expect(fitVariogram([{ pairs: 9, distanceM: 1, gamma: 0 }, { pairs: 9, distanceM: 2, gamma: 0 }, { pairs: 9, distanceM: 3, gamma: 0 }])).toBeNull();
  });
});

describe('ordinary kriging', () => {
  const four = points([0, 0, 0.5], [10, 0, 0.62], [0, 10, 0.55], [15, 12, 0.7]);
  const model: VariogramModel = { shape: 'spherical', nugget: 0.002, partialSill: 0.008, rangeM: 30 };

  // Reference: gstat 2.1-0 (krige with vgm(0.008, "Sph", 30, 0.002)) and the system solved by hand.
  it('of four points has the weights, value and variance of the reference', () => {
    const { value, variance, weights, multiplier } = krigingSystem(four, model).detailAt(5, 5);
    expect([...weights]).toEqual([0.261921898, 0.290942659, 0.304089221, 0.143046223].map((weight) => expect.closeTo(weight, 8) as number));
    expect(multiplier).toBeCloseTo(-5.90013e-5, 8);
    expect(value).toBeCloseTo(0.578726825, 8);
    expect(variance).toBeCloseTo(0.005097844, 8);
    expect(krigingSystem(four, model).valueAt(5, 5)).toBeCloseTo(value, 12);
  });

  it('keeps a level surface level, and bears two readings on one spot', () => {
    const level = krigingSystem(points([0, 0, 7], [0, 0, 7], [9, 3, 7], [4, 8, 7]), { ...model, nugget: 0 });
    expect(level.valueAt(3, 3)).toBeCloseTo(7, 6);
    expect(level.valueAt(40, 40)).toBeCloseTo(7, 6);
  });
});

describe('the surface of a survey', () => {
  // 120 by 80 m in cells of 2 m.
  const grid = gridOfOutline([[[[500_000, 4_700_000], [500_120, 4_700_000], [500_120, 4_700_080], [500_000, 4_700_080], [500_000, 4_700_000]]]], 32630, 2);
  const ground = (x: number, y: number) => 40 + 12 * Math.sin((x - 500_000) / 25) + 8 * Math.cos((y - 4_700_000) / 20);

  function survey({ lineM, stepM, noise, seed }: { lineM: number; stepM: number; noise: number; seed: number }): ValuedPoints {
    const random = seededRandom(seed);
    const rows: [number, number, number][] = [];
    for (let x = 500_001; x < 500_120; x += lineM) for (let y = 4_700_001; y < 4_700_080; y += stepM) rows.push([x, y, ground(x, y) + noise * randomNormal(random)]);
    return points(...rows);
  }
  const errorOf = (cells: Float32Array) => {
    let [sum, count] = [0, 0];
    cells.forEach((value, cell) => {
      if (Number.isNaN(value)) return;
      sum += (value - ground(grid.x0 + ((cell % grid.cols) + 0.5) * 2, grid.y0 - (Math.floor(cell / grid.cols) + 0.5) * 2)) ** 2;
      count += 1;
    });
    return Math.sqrt(sum / count);
  };

  it('is kriged from many points and nearer to the ground than by inverse distance', () => {
    const driven = survey({ lineM: 8, stepM: 1.5, noise: 3, seed: 6 });
    const surface = surveySurface(grid, driven);
    expect(surface).toMatchObject({ method: 'kriging' });
    expect(surface.cells.every((value) => !Number.isNaN(value))).toBe(true);
    expect(surface.standardError).toBeGreaterThan(1);
    expect(errorOf(surface.cells)).toBeLessThan(0.8 * errorOf(inverseDistance(grid, driven)));
  });

  it('falls back to inverse distance for few points', () => {
    expect(surveySurface(grid, survey({ lineM: 30, stepM: 20, noise: 0, seed: 1 }))).toMatchObject({ method: 'inverseDistance', places: 16, model: null });
  });

  it('falls back to inverse distance where nothing varies', () => {
    const level = survey({ lineM: 8, stepM: 4, noise: 0, seed: 1 });
    const surface = surveySurface(grid, { ...level, value: level.value.map(() => 5) });
    expect(surface.method).toBe('inverseDistance');
    expect(surface.cells.every((value) => value === 5)).toBe(true);
  });

  it('leaves cells empty beyond the reach of the data', () => {
    const driven = survey({ lineM: 5, stepM: 1.5, noise: 3, seed: 2 });
    const keep = [...driven.x.keys()].filter((point) => driven.x[point]! < 500_050);
    const half = { x: Float64Array.from(keep, (point) => driven.x[point]!), y: Float64Array.from(keep, (point) => driven.y[point]!), value: Float64Array.from(keep, (point) => driven.value[point]!) };
    const surface = surveySurface(grid, half);
    const east = 500_046 + surface.reachM;
    surface.cells.forEach((value, cell) => expect(Number.isNaN(value), `cell ${cell}`).toBe(distanceFrom(half, cell) > surface.reachM));
    expect(east).toBeLessThan(500_090);
  });

  function distanceFrom({ x, y }: ValuedPoints, cell: number): number {
    const [east, north] = [grid.x0 + ((cell % grid.cols) + 0.5) * 2, grid.y0 - (Math.floor(cell / grid.cols) + 0.5) * 2];
    return x.reduce((least, each, point) => Math.min(least, Math.hypot(each - east, y[point]! - north)), Infinity);
  }
});

// Zinc in the topsoil of a flood plain, from the R package sp; numbers by gstat 2.1-0, the fit as printed in its manual.
const samples = realSamples();
describe.skipIf(samples.rows === null)(`155 real samples${samples.whyNot === null ? '' : ` (skipped: ${samples.whyNot})`}`, () => {
  const zinc = points(...(samples.rows ?? []));

  it('have the first bins of the reference', () => {
    const bins = empiricalVariogram(zinc);
    expect(bins.slice(0, 3).map(({ pairs }) => pairs)).toEqual([57, 299, 419]);
    expect(bins.slice(0, 3).map(({ distanceM }) => distanceM)).toEqual([79.2924, 163.9737, 267.3648].map((distance) => expect.closeTo(distance, 3) as number));
    expect(bins.slice(0, 3).map(({ gamma }) => gamma)).toEqual([0.1234479, 0.2162185, 0.3027859].map((gamma) => expect.closeTo(gamma, 6) as number));
  });

  it('have the spherical model and the estimates of the reference', () => {
    const model = fitVariogram(empiricalVariogram(zinc), ['spherical'])!;
    expect(model.nugget / 0.0506624).toBeCloseTo(1, 3);
    expect(model.partialSill / 0.5906078).toBeCloseTo(1, 3);
    expect(model.rangeM / 897.0209).toBeCloseTo(1, 3);
    const system = krigingSystem(zinc, model);
    const places = [[181180, 333740], [181140, 333700], [181180, 333700]] as const;
    expect(places.map(([x, y]) => system.detailAt(x, y).value)).toEqual([6.499624, 6.622356, 6.505166].map((value) => expect.closeTo(value, 3) as number));
    expect(places.map(([x, y]) => system.detailAt(x, y).variance)).toEqual([0.319808, 0.25202, 0.272985].map((variance) => expect.closeTo(variance, 3) as number));
  });
});

/** The samples as R gives them: from the installed package, else from the Debian package unpacked into a folder that is deleted. */
function realSamples(): { rows: [number, number, number][] | null; whyNot: string | null } {
  const print = 'write.table(meuse[, c("x", "y", "zinc")], sep = " ", row.names = FALSE, col.names = FALSE)';
  const folder = mkdtempSync(join(tmpdir(), 'samples-'));
  const run = (command: string, ...args: string[]) => execFileSync(command, args, { cwd: folder, encoding: 'utf8', stdio: ['ignore', 'pipe', 'ignore'], timeout: 20_000 });
  try {
    if (!run('Rscript', '-e', 'cat(nzchar(system.file(package = "sp")))').endsWith('TRUE')) {
      run('apt-get', 'download', 'r-cran-sp');
      run('dpkg-deb', '-x', readdirSync(folder).find((name) => name.endsWith('.deb'))!, 'unpacked');
    }
    const table = run('Rscript', '-e', `.libPaths(c("unpacked/usr/lib/R/site-library", .libPaths())); data("meuse", package = "sp"); ${print}`);
    return { rows: table.trim().split('\n').map((line) => line.split(' ').map(Number)).map(([x, y, zinc]) => [x!, y!, Math.log(zinc!)]), whyNot: null };
  } catch (error) {
    return { rows: null, whyNot: `R with the package sp cannot be had here: ${String((error as Error).message).split('\n')[0]}` };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
