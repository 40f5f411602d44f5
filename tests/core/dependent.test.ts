import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { asDependent, chanceAllWithin, combineDependent, dependent, scaled, sumFigures, timesShared } from '../../shared/cellar/dependent.ts';
import { lotTonnes, lotValue } from '../../shared/cellar/lots.ts';
import { fitTank } from '../../shared/cellar/tankFit.ts';
import { estimateYield } from '../../shared/cellar/yield.ts';

const exact = (value: number) => ({ value, standardError: 0, df: Infinity });
const zone = (tonnes: number, own: number, growth: number) => dependent(tonnes, [{ standardError: own, df: Infinity }], { growth: { standardError: growth, df: Infinity } });

describe('estimates that share a factor', () => {
  it('add what they share straight and the rest in squares', () => {
    // By hand: √(1² + 1² + (1 + 1)²)
    const sum = combineDependent([{ factor: 1, estimate: zone(10, 1, 1) }, { factor: 1, estimate: zone(10, 1, 1) }]);
    expect(sum.value).toBe(20);
    expect(sum.standardError).toBeCloseTo(Math.sqrt(6), 12);
    expect(lotTonnes([{ tonnes: zone(10, 1, 1) }, { tonnes: zone(10, 1, 1) }])!.standardError).toBeCloseTo(Math.sqrt(6), 12);
  });

  it('do not shrink an assumed ± 30 % by having more zones', () => {
    const zones = Array.from({ length: 6 }, () => zone(5, 0, 5 * 0.3));
    expect(lotTonnes(zones.map((tonnes) => ({ tonnes })))!.standardError).toBeCloseTo(30 * 0.3, 12);
  });

  it('keep the degrees of freedom of what all of them rest on', () => {
    const learned = dependent(10, [], { growth: { standardError: 2, df: 2 } });
    expect(combineDependent([{ factor: 1, estimate: learned }, { factor: 1, estimate: learned }]).df).toBeCloseTo(2, 12);
    expect(asDependent({ value: 1, standardError: 0.2, df: 7 }).df).toBeCloseTo(7, 12);
  });

  it('move no weight of a lot by a factor that is common to all of it', () => {
    // The shares of two zones stay what they are when both grow by the same factor.
    const parts = [zone(4, 0, 1.2), zone(6, 0, 1.8)].map((tonnes, at) => ({ zone: String(at), areaHa: 1, tonnes, value: exact(22 + 3 * at) }));
    expect(lotValue(parts).standardError).toBeCloseTo(0, 12);
    const apart = parts.map((part) => ({ ...part, tonnes: { value: part.tonnes.value, standardError: part.tonnes.standardError, df: Infinity } }));
    expect(lotValue(apart).standardError).toBeGreaterThan(0.2);
  });

  it('share the litres a tonne once they are litres', () => {
    const must = timesShared(zone(10, 1, 0), { value: 800, standardError: 25, df: Infinity }, 'must red');
    // By hand: √((800·1)² + (10·25)²), of which 250 L are shared.
    expect(must.standardError).toBeCloseTo(Math.hypot(800, 250), 9);
    expect(must.shared['must red']!.standardError).toBe(250);
    expect(scaled(must, 0.5).standardError).toBeCloseTo(Math.hypot(800, 250) / 2, 9);
  });

  it('agree with a simulation', () => {
    const random = seededRandom(8);
    const parts = [{ tonnes: 6, own: 0.5, growth: 0.9 }, { tonnes: 9, own: 0.8, growth: 1.35 }, { tonnes: 3, own: 0.4, growth: 0.45 }];
    const draws = Array.from({ length: 20_000 }, () => {
      const factor = randomNormal(random);
      return parts.reduce((sum, { tonnes, own, growth }) => sum + tonnes + own * randomNormal(random) + growth * factor, 0);
    });
    const mean = draws.reduce((sum, value) => sum + value, 0) / draws.length;
    const sd = Math.sqrt(draws.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (draws.length - 1));
    // The sd of 20 000 draws is itself known to half a per cent.
    const told = lotTonnes(parts.map(({ tonnes, own, growth }) => ({ tonnes: zone(tonnes, own, growth) })))!.standardError;
    expect(Math.abs(told / sd - 1)).toBeLessThan(0.02);
  });
});

describe('figures on a screen', () => {
  const figure = (value: number, own: number, growth: number) => ({ value, standardError: Math.hypot(own, growth), halfWidth: 2 * Math.hypot(own, growth), shared: { growth } });

  it('add up as the estimates behind them do', () => {
    const sum = sumFigures([{ factor: 1, figure: figure(10, 1, 1) }, { factor: 0.5, figure: figure(8, 2, 2) }]);
    // By hand: own 1² + 1², shared (1 + 1)²
    expect(sum).toMatchObject({ value: 14, shared: { growth: 2 } });
    expect(sum.standardError).toBeCloseTo(Math.sqrt(6), 12);
    expect(sum.halfWidth).toBeCloseTo(2 * Math.sqrt(6), 12);
  });

  it('have no width where none is known', () => {
    expect(sumFigures([{ factor: 1, figure: { value: 3, standardError: null, halfWidth: null } }])).toEqual({ value: 3, standardError: 0, halfWidth: 0, shared: {} });
    expect(sumFigures([])).toEqual({ value: 0, standardError: 0, halfWidth: 0, shared: {} });
  });
});

describe('the chance that all lots fit', () => {
  it('is higher than the product where lots are too large together', () => {
    // scipy 1.10.1 multivariate_normal.cdf with covariance 100, 64: 0.759594; the product is 0.707861.
    const load = { figure: { value: 100, standardError: 10, halfWidth: null, shared: { growth: 8 } }, limit: 110 };
    expect(Math.abs(chanceAllWithin([load, load]) - 0.759594)).toBeLessThan(0.005);
  });

  it('agrees with the normal integral over two shared factors', () => {
    // scipy 1.10.1 multivariate_normal.cdf: 0.508120
    const load = (value: number, limit: number, own: number, shared: Record<string, number>) => ({ figure: { value, standardError: Math.hypot(own, ...Object.values(shared)), halfWidth: null, shared }, limit });
    const chance = chanceAllWithin([load(90, 100, 5, { g: 8 }), load(80, 95, 4, { g: 8, h: 3 }), load(70, 72, 6, { h: 5 })]);
    expect(Math.abs(chance - 0.50812)).toBeLessThan(0.005);
  });

  it('is the plain product without anything shared, and a plain answer without any error', () => {
    const free = { figure: { value: 100, standardError: 10, halfWidth: null }, limit: 110 };
    // Φ(1)² = 0.707861, from tables
    expect(chanceAllWithin([free, free])).toBeCloseTo(0.707861, 5);
    const sure = (limit: number) => ({ figure: { value: 100, standardError: 0, halfWidth: 0 }, limit });
    expect(chanceAllWithin([sure(100), sure(120)])).toBe(1);
    expect(chanceAllWithin([sure(99), sure(120)])).toBe(0);
  });
});

describe('expected tonnes from few vines', () => {
  const few = { places: 1000, missingShare: 0, clustersPerVine: 28, clusterWeightG: 120, relativeErrors: { clusters: 0.08, clusterWeight: 0.12 }, degreesOfFreedom: { clusters: 4, clusterWeight: 4 }, confidence: 0.95 } as const;

  it('are as wide as Student’s t says', () => {
    // scipy 1.10.1: Satterthwaite 6.969072, t 2.366753, half-width 34.1338 %
    const answer = estimateYield(few);
    expect(answer.df).toBeCloseTo(6.969072, 6);
    expect(answer.halfWidthT / answer.tonnes).toBeCloseTo(0.341338, 6);
    expect(estimateYield({ ...few, degreesOfFreedom: {} }).df).toBe(Infinity);
  });

  it('hold what they promise: five vines counted and five clusters weighed', () => {
    const random = seededRandom(21);
    const [seasons, n] = [6000, 5];
    const sample = (mean: number, cv: number) => {
      const values = Array.from({ length: n }, () => mean * (1 + cv * randomNormal(random)));
      const middle = values.reduce((sum, value) => sum + value, 0) / n;
      const sd = Math.sqrt(values.reduce((sum, value) => sum + (value - middle) ** 2, 0) / (n - 1));
      return { mean: middle, relative: sd / Math.sqrt(n) / middle };
    };
    let [held, heldByZ] = [0, 0];
    for (let season = 0; season < seasons; season++) {
      const [clusters, weight] = [sample(28, 0.25), sample(120, 0.35)];
      const facts = { ...few, clustersPerVine: clusters.mean, clusterWeightG: weight.mean, relativeErrors: { clusters: clusters.relative, clusterWeight: weight.relative } };
      const truth = 1000 * 28 * 0.12 / 1000;
      for (const [answer, count] of [[estimateYield(facts), () => held++], [estimateYield({ ...facts, degreesOfFreedom: {} }), () => heldByZ++]] as const) if (Math.abs(answer.tonnes - truth) <= answer.halfWidthT) count();
    }
    // Binomial sd 0.003. By the normal quantile only about 91 of 100 would hold.
    expect(held / seasons).toBeGreaterThan(0.94);
    expect(held / seasons).toBeLessThan(0.97);
    expect(heldByZ / seasons).toBeLessThan(0.925);
  });

  it('make a tank less sure, too', () => {
    // scipy 1.10.1: t.cdf(−320/600, 4) = 0.311030; by the normal 0.296901
    const tank = { volumeL: 12_000, fillShare: 0.8 };
    expect(fitTank({ value: 9920, standardError: 600, df: 4 }, tank).chanceOfFit).toBeCloseTo(0.31103, 5);
    expect(fitTank({ value: 9920, standardError: 600, df: Infinity }, tank).chanceOfFit).toBeCloseTo(0.296901, 5);
  });
});
