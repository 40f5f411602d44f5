import { describe, expect, it } from 'vitest';
import { potentialAlcohol } from '../../shared/cellar/alcohol.ts';
import { dependent, timesShared, type Dependent } from '../../shared/cellar/dependent.ts';
import { lotLikeness } from '../../shared/cellar/lotLikeness.ts';
import { lotPh, lotTonnes, lotValue, type LotPart } from '../../shared/cellar/lots.ts';
import { fitTank } from '../../shared/cellar/tankFit.ts';
import { ASSUMED_GROWTH_HALF_WIDTH, estimateYield, type YieldEstimate } from '../../shared/cellar/yield.ts';
import { intervalOf, type Estimate } from '../../shared/sampling/precision.ts';
import { criticalZ } from '../../shared/sampling/quantiles.ts';

/**
 * A lot of two zones of an invented estate, followed from vines to tank. All expected values were worked out apart from
 * this code with Python 3.11 and scipy 1.10.1 (t, norm), from the formulas only: products with relative errors in squares,
 * one growth factor and one share of losses for both zones, Satterthwaite's degrees of freedom, weights by tonnes.
 */
const growthError = ASSUMED_GROWTH_HALF_WIDTH / criticalZ(0.95);
const lossesError = 0.02;
const estimate = (value: number, standardError: number, df: number): Estimate => ({ value, standardError, df });
const zones = [
  { name: 'bank 1', bearing: 3656, clusters: estimate(19.6, 1.0008481693585878, 9), weight: estimate(57.25, 4.695795132555075, 11), brix: estimate(23.75, 0.2280913081446488, 11), sd: 0.7914313844949766, ph: estimate(3.4258333333333333, 0.017224608141629683, 11) },
  { name: 'furrow 1', bearing: 5249, clusters: estimate(18.333333333333332, 0.8814129109245358, 5), weight: estimate(80.72727272727272, 8.512793306488826, 10), brix: estimate(25.15714285714286, 0.33348468511257345, 6), sd: 0.8829064557040052, ph: estimate(3.44, 0.01798270545620906, 6) },
] as const;

function yieldOf({ bearing, clusters, weight }: (typeof zones)[number]): YieldEstimate {
  return estimateYield({
    places: bearing, missingShare: 0, clustersPerVine: clusters.value, clusterWeightG: weight.value, growthFactor: 2, lossShare: 0.03, confidence: 0.95, growthIsAssumed: true,
    relativeErrors: { clusters: clusters.standardError / clusters.value, clusterWeight: weight.standardError / weight.value, growth: growthError, losses: lossesError },
    degreesOfFreedom: { clusters: clusters.df, clusterWeight: weight.df },
  });
}

function tonnesOf(zone: (typeof zones)[number]): Dependent {
  const { tonnes } = yieldOf(zone);
  const term = (relative: number, df: number) => ({ standardError: tonnes * relative, df });
  return dependent(
    tonnes,
    [term(zone.clusters.standardError / zone.clusters.value, zone.clusters.df), term(zone.weight.standardError / zone.weight.value, zone.weight.df)],
    { growth: term(growthError, Infinity), losses: term(lossesError, Infinity) },
  );
}

const parts = (of: 'brix' | 'ph'): LotPart[] => zones.map((zone) => ({ zone: zone.name, areaHa: 1, tonnes: tonnesOf(zone), value: zone[of] }));
const near = (actual: number, expected: number) => expect(Math.abs(actual / expected - 1)).toBeLessThan(1e-8);

describe('a lot worked out by hand', () => {
  it('gives the tonnes of each zone with its parts', () => {
    const [first, second] = zones.map(yieldOf);
    near(first!.tonnes, 7.958651344);
    near(first!.halfWidthT, 2.8559687851673523);
    near(second!.halfWidthT, 5.769320883600732);
    const share = (part: string) => first!.parts.find((one) => one.part === part)!.share;
    near(share('growth'), 0.7064507873064161);
    near(share('clusterWeight'), 0.202863020087378);
    near(share('clusters'), 0.07862485212494123);
    expect(first!.dominating).toBe('growth');
  });

  it('adds them up with what they share', () => {
    const tonnes = lotTonnes(parts('brix'))!;
    near(tonnes.value, 23.029580144);
    near(tonnes.standardError, 4.034820147057708);
    near(intervalOf(tonnes, 0.95).halfWidth, 7.93391994711072);
  });

  it('weighs its composition, and says how much of its spread lies between the zones', () => {
    const brix = lotValue(parts('brix'));
    near(brix.value, 24.670856988222326);
    near(intervalOf(brix, 0.95).halfWidth, 0.5434616376632019);
    const ph = lotPh(parts('ph'));
    near(intervalOf(ph, 0.95).halfWidth, 0.029773374607554682);
    near(ph.viaHydrogen, 3.435051799679223);
    const likeness = lotLikeness(zones.map((zone) => ({ zone: zone.name, weight: tonnesOf(zone).value, mean: zone.brix, sd: zone.sd })));
    near(likeness.betweenShare, 0.3612228726536786);
  });

  it('becomes litres, a chance of fit and a range of potential alcohol', () => {
    const must = timesShared(lotTonnes(parts('brix'))!, { value: 900, standardError: 25, df: Infinity }, 'must red');
    near(must.standardError, 3676.6958818317885);
    near(intervalOf(must, 0.95).halfWidth, 7228.574642411193);
    near(fitTank(must, { volumeL: 32_000, fillShare: 0.8 }).chanceOfFit, 0.9071064930698349);
    const brix = lotValue(parts('brix'));
    const { halfWidth } = intervalOf(brix, 0.95);
    const alcohol = potentialAlcohol({ lower: brix.value - halfWidth, value: brix.value, upper: brix.value + halfWidth }, 'brixFactor');
    near(alcohol.low, 13.27006744280752);
    near(alcohol.high, 15.632877548049027);
  });
});
