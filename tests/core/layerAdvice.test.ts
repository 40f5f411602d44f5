import { describe, expect, it } from 'vitest';
import { rankCorrelation } from '../../shared/analysis/agreement.ts';
import { gridOfOutline } from '../../shared/analysis/grid.ts';
import { pointTable } from '../../shared/analysis/kmeansPoints.ts';
import { adviseLayers, layersToCompare, compareEdges, edgeTask, withEdges, type AdvisableLayer } from '../../shared/analysis/layerAdvice.ts';
import { edgeComparison, interiorCells } from '../../shared/analysis/layerAdviceEdges.ts';
import { principalComponents } from '../../shared/analysis/principal.ts';
import { randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { gradientSquares } from '../../shared/analysis/verdictCalmCells.ts';
import { adviseZoneCount } from '../../shared/analysis/zoneCount.ts';
import { smoothField } from '../bench/simulatedFields.ts';

const grid = gridOfOutline([[[[0, 0], [160, 0], [160, 120], [0, 120], [0, 0]]]], 32631, 4);
const random = seededRandom(5);
const fieldOf = (lengthM: number) => Float32Array.from(smoothField(grid, lengthM, random));
const steps = (field: Float32Array, noise: number) => field.map((value) => (value > 0 ? 1 : 0) + noise * randomNormal(random));
const body = fieldOf(60);
function advised(layers: readonly AdvisableLayer[], edgeRandom: Random) {
  return withEdges(adviseLayers(layers), compareEdges(edgeTask(grid, layers), edgeRandom));
}

const layer = (id: string, role: 'evidence' | 'context', cells: Float32Array, kind: 'number' | 'class' = 'number'): AdvisableLayer => ({ id, role, kind, cells });

describe('edges of two layers', () => {
  const plane = { width: 6, height: 6, mask: new Uint8Array(36).fill(1) };
  const picture = (valueAt: (row: number, col: number) => number) => Float64Array.from({ length: 36 }, (_, cell) => valueAt(Math.floor(cell / 6), cell % 6));
  const edges = (values: Float64Array) => Float64Array.from(interiorCells(plane, 1), (cell) => Math.sqrt(gradientSquares(plane, values)[cell]!));
  const a = edges(picture((_row, col) => Number(col >= 3)));
  const b = edges(picture((row, col) => Number(col >= 3) + Number(row >= 3)));
  const c = edges(picture((row) => Number(row >= 3)));

  it('correlate by rank as scipy has it', () => {
    expect(rankCorrelation(a, b)).toBeCloseTo(0.707107, 6);
    expect(rankCorrelation(a, c)).toBeCloseTo(0, 12);
    expect(rankCorrelation(b, c)).toBeCloseTo(0.707107, 6);
  });

  it('coincide wholly with themselves and by chance only with a mirror image of noise', () => {
    const side = 40;
    const square = { width: side, height: side, mask: new Uint8Array(side * side).fill(1) };
    const noise = Float64Array.from({ length: side * side }, () => randomNormal(random));
    const mirrored = noise.map((_, cell) => noise[Math.floor(cell / side) * side + side - 1 - (cell % side)]!);
    const against = (context: Float64Array) => edgeComparison({ plane: square, cellSizeM: 4 }, [noise], seededRandom(1))([context]);
    expect(against(noise).correlation).toBeCloseTo(1, 12);
    expect(against(noise).deviations).toBeGreaterThan(3);
    expect(Math.abs(against(mirrored).correlation)).toBeLessThan(2 / Math.sqrt(side * side / 9));
  });
});

describe('layer advice', () => {
  it('counts measured layers the same and leaves context out', () => {
    const found = advised([layer('vigour', 'evidence', steps(body, 0.3)), layer('conductivity', 'evidence', steps(body, 0.5)), layer('elevation', 'context', fieldOf(90))], seededRandom(1));
    expect(found.map(({ weight }) => weight)).toEqual([1, 1, 0]);
    expect(found.map(({ code }) => code)).toEqual(['evidence', 'evidence', 'context-off']);
  });

  it('lets two layers that repeat each other share one voice', () => {
    const vigour = steps(body, 0.3);
    const again = vigour.map((value) => 100 + 20 * value);
    const found = advised([layer('may', 'evidence', vigour), layer('june', 'evidence', again), layer('conductivity', 'evidence', fieldOf(40))], seededRandom(1));
    expect(found.map(({ weight }) => weight)).toEqual([0.5, 0.5, 1]);
    expect(found[0]).toMatchObject({ code: 'repeats', about: 'june', figures: { correlation: expect.closeTo(1, 5) } });
  });

  it('offers a soil map whose edges lie where the vines change, numbers or classes alike, and still does not add it', () => {
    const soil = steps(body, 0);
    for (const kind of ['number', 'class'] as const) {
      const found = advised([layer('vigour', 'evidence', steps(body, 0.15)), layer('soil', 'context', soil, kind)], seededRandom(1));
      expect(found[1]).toMatchObject({ weight: 0, code: 'context-offered' });
      expect(found[1]!.figures.deviations).toBeGreaterThan(3);
    }
  });

  it('seldom offers terrain that has nothing to do with the vines', () => {
    const offered = Array.from({ length: 8 }, (_, seed) => advised([layer('vigour', 'evidence', steps(fieldOf(60), 0.3)), layer('elevation', 'context', fieldOf(80))], seededRandom(seed))[1]!).filter(({ code }) => code === 'context-offered');
    expect(offered.length).toBeLessThanOrEqual(1);
  });

  it('uses context when there is nothing else, and says so', () => {
    expect(advised([layer('elevation', 'context', body)], seededRandom(1))).toMatchObject([{ weight: 1, code: 'only-context' }]);
  });

  it('does not fail on a constant context layer', () => {
    expect(advised([layer('vigour', 'evidence', body), layer('flat', 'context', new Float32Array(body.length).fill(3))], seededRandom(1))[1]).toMatchObject({ weight: 0, code: 'context-off' });
  });
});

describe('the number of zones', () => {
  const row = (k: number, gap: number, separation: number, holds = 1) => ({ k, gap, separation, gapSd: 0.1, withinShare: 0.1, holds });

  it('has the largest ln(Calinski–Harabasz) + gap, and close neighbours are offered', () => {
    const advice = adviseZoneCount({ curve: [row(2, 0.2, 100), row(3, 0.9, 150), row(4, 0.85, 152), row(5, 0.2, 100)], layerCount: 2, workable: [2, 3, 4, 5] });
    expect(advice.best).toBe(3);
    expect(advice.alsoOffer).toEqual([4]);
    expect(advice.scores[1]!.score).toBeCloseTo(Math.log(150) + 0.9, 12);
  });

  it('goes by the gap alone for a single layer, where separation grows with every zone', () => {
    expect(adviseZoneCount({ curve: [row(2, 0.6, 100), row(3, 0.5, 300), row(4, 0.4, 900)], layerCount: 1, workable: [2, 3, 4] }).best).toBe(2);
  });

  it('ends where less than five points of the variance are left, whatever small differences say', () => {
    // Two plateaus of 20 ha in one layer, with 2 % noise and no smoothing: two zones explain 99.7 %, and the median of the flat rest would be three.
    const curve = [row(2, 4.7, 1, 1), row(3, 4.26, 1, 0.9), row(4, 4.29, 1, 0.69), row(5, 4.4, 1, 0.75), row(6, 4.3, 1, 0.83)].map((one) => ({ ...one, gapSd: 0.3 }));
    const advise = (withinShare: number) => adviseZoneCount({ curve: curve.map((one) => ({ ...one, withinShare })), layerCount: 1, workable: [2, 3, 4, 5, 6] }).best;
    expect([advise(0.003), advise(0.06)]).toEqual([2, 3]);
  });

  it('takes the smaller number on a tie', () => {
    expect(adviseZoneCount({ curve: [row(2, 0.5, 100), row(3, 0.5, 100)], layerCount: 2, workable: [2, 3] }).best).toBe(2);
  });

  it('is the median of the numbers under exp(score / √2 spread) × hold², by hand', () => {
    // Spread 0.1 / √2, so that a difference of 0.1 is one unit of chance. Scores 0, 0.1, 0.2 weigh e⁻², e⁻¹ and 1: half of 1.503 lies in the last …
    const even = (holds: readonly number[]) => [2, 3, 4].map((k, at) => ({ ...row(k, 0.1 * at, Math.E, holds[at]), gapSd: 0.1 / Math.SQRT2 }));
    const advise = (holds: readonly number[]) => adviseZoneCount({ curve: even(holds), layerCount: 2, workable: [2, 3, 4] });
    expect(advise([1, 1, 1]).best).toBe(4);
    // … which holds to 0.6 and counts 0.36: half of 0.863 lies in the middle one, although the last has the highest score and is offered.
    expect(advise([1, 1, 0.6]).best).toBe(3);
    expect(advise([1, 1, 0.6]).alsoOffer).toContain(4);
  });

  it('is none with a zone that dissolves when ground is drawn anew, and the highest score is offered beside it', () => {
    const curve = [row(2, 0.9, 100, 0.97), row(3, 1.5, 150, 0.9), row(4, 1.3, 140, 0.8), row(5, 1.7, 180, 0.45)];
    expect(adviseZoneCount({ curve, layerCount: 2, workable: [2, 3, 4, 5] })).toMatchObject({ best: 3, alsoOffer: [5] });
    // Where nothing holds, the score alone is left.
    expect(adviseZoneCount({ curve: curve.map((one) => ({ ...one, holds: 0.45 })), layerCount: 2, workable: [2, 3, 4, 5] })).toMatchObject({ best: 5, alsoOffer: [] });
  });

  it('offers a neighbour whose zones are stable where its own are not', () => {
    const curve = [row(2, 0.5, 100, 0.99), row(3, 0.9, 150, 0.7), row(4, 0.2, 100, 0.7)];
    expect(adviseZoneCount({ curve, layerCount: 2, workable: [2, 3, 4] })).toMatchObject({ best: 3, alsoOffer: [2] });
    const sure = curve.map((one) => ({ ...one, holds: one.k === 3 ? 0.9 : 0.99 }));
    expect(adviseZoneCount({ curve: sure, layerCount: 2, workable: [2, 3, 4] }).alsoOffer).toEqual([]);
    expect(adviseZoneCount({ curve: sure, layerCount: 2, workable: [2, 3, 4], stability: new Map([[2, 0.98], [3, 0.67], [4, 0.7]]) }).alsoOffer).toEqual([2]);
  });

  it('is never one whose zones clean-up would remove', () => {
    const curve = [row(2, 0.5, 100), row(3, 0.9, 200), row(4, 0.8, 150)];
    expect(adviseZoneCount({ curve, layerCount: 2, workable: [2, 4] })).toMatchObject({ best: 4, alsoOffer: [] });
    expect(adviseZoneCount({ curve, layerCount: 2, workable: [] }).best).toBe(2);
  });
});

describe('principal components', () => {
  it('of two equal columns are one that keeps the distances', () => {
    const { scores, shares } = principalComponents(pointTable([[1, 1], [2, 2], [4, 4]]));
    expect(scores.dimensions).toBe(1);
    expect(shares[0]).toBeCloseTo(1, 12);
    expect(scores.values[2]! - scores.values[0]!).toBeCloseTo(3 * Math.SQRT2, 9);
  });

  it('match numpy on a small table', () => {
    // numpy 1.24.2 linalg.eigh of the covariance; signs fixed by the largest part.
    const { shares, loadings } = principalComponents(pointTable([[2, 0, 1], [4, 1, 3], [6, 3, 2], [8, 3, 6], [1, 0, 0]]), 1);
    [0.931339528, 0.0679847736, 0.000675698305].forEach((share, i) => expect(shares[i]).toBeCloseTo(share, 8));
    [0.7418454, 0.36369011, 0.56337812, -0.30190849, -0.56903263, 0.76488766].forEach((part, i) => expect(loadings[i]).toBeCloseTo(part, 7));
  });
});

describe('a measured layer that looks like noise', () => {
  const layer = (id: string) => ({ id, role: 'evidence' as const, kind: 'number' as const, weight: null, cells: Float32Array.from({ length: 50 }, (_, i) => Math.sin(i * id.length)) });
  const three = [layer('a'), layer('bb'), layer('ccc')];

  it('has a small voice among clear ones, and says by how much it is less clear', () => {
    const advised = adviseLayers(three, new Map([['a', 0.6], ['bb', 0.5], ['ccc', -0.04]]));
    expect(advised.map(({ code }) => code)).toEqual(['evidence', 'evidence', 'scattered']);
    expect(advised[2]).toMatchObject({ weight: expect.closeTo(0.05 / 0.6, 12), figures: { structure: -0.04, clearest: 0.6 } });
  });

  it('counts as the others where none is clear, and is not looked for among two or when a person left one out', () => {
    expect(adviseLayers(three, new Map([['a', 0.1], ['bb', 0.02], ['ccc', -0.04]])).map(({ weight }) => weight)).toEqual([1, 1, 1]);
    expect(layersToCompare(three)).toHaveLength(3);
    expect(layersToCompare(three.slice(1))).toEqual([]);
    expect(layersToCompare([three[0]!, three[1]!, { ...three[2]!, weight: 0 }])).toEqual([]);
  });
});
