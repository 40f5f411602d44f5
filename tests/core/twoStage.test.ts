import { describe, expect, it } from 'vitest';
import { bestPerCluster, bestPerVine, bestSplit, designEffect, effectiveUnits, stageCost, stageVariance } from '../../shared/sampling/twoStage.ts';

function expectRelative(actual: number, expected: number, tolerance = 1e-6): void {
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(tolerance * Math.abs(expected));
}

describe('design effect', () => {
  it('discounts clusters that share a vine', () => {
    // Kish 1965, computed with R 4.2.2
    expectRelative(designEffect(5, 0.3), 2.2, 1e-12);
    expectRelative(effectiveUnits(60, 5, 0.3), 27.2727, 1e-5);
    expectRelative(designEffect(10, 0.05), 1.45, 1e-12);
    expectRelative(effectiveUnits(200, 10, 0.05), 137.931034, 1e-8);
    expect(effectiveUnits(60, 5, -0.1)).toBe(60);
  });
});

describe('vines and clusters', () => {
  const variances = { betweenVines: 0.64, withinVine: 2.25 };
  const costs = { perVine: 6, perCluster: 0.5 };

  it('gives the best number per vine and the variance around it', () => {
    // Brus, Spatial Sampling with R, ch. 7 (formulas), computed with R 4.2.2
    expectRelative(bestPerVine(Math.sqrt(2.25 / 0.64), costs), 6.495191, 1e-6);
    const atBudget = [[1, 0.156541667], [3, 0.086875], [6, 0.076125], [7, 0.076113095], [10, 0.079291667]] as const;
    for (const [perVine, variance] of atBudget) {
      const vines = 120 / (6 + 0.5 * perVine);
      expectRelative(stageVariance(variances, { vines, perVine }), variance, 1e-8);
    }
  });

  it('takes four clusters at 90 s a vine, 8 s a cluster and a spread ratio of 1.2', () => {
    // 1.2 · √(90/8) = 4.02
    expectRelative(bestPerVine(1.2, { perVine: 90, perCluster: 8 }), 4.02, 2e-3);
    const split = bestSplit({ variances: { betweenVines: 1, withinVine: 1.44 }, costs: { perVine: 90, perCluster: 8 }, target: { variance: 0.02 } });
    expect(split.perVine).toBe(4);
    expectRelative(split.best.perVine, 4.0249, 1e-4);
    expect(split.variance).toBeLessThanOrEqual(0.02);
  });

  it('prefers the smaller handful where the optimum is flat', () => {
    const split = bestSplit({ variances, costs, target: { budget: 1200 } });
    // The formula says 6.5; five clusters cost 1 % more in variance, which is worth less than the walk
    expect(split.perVine).toBeLessThanOrEqual(6);
    expect(split.cost).toBeLessThanOrEqual(1200);
    expectRelative(split.variance, stageVariance(variances, split), 1e-12);
  });

  it('takes one cluster a vine for the figures of Rankine, Cellier and Boehm', () => {
    // Am. J. Enol. Vitic. 13:58 (1962): 25 vines × 1 and 21 vines × 2 have the same standard error of 0.25 %
    const rankine = { betweenVines: 1.0625, withinVine: 0.5 };
    expectRelative(Math.sqrt(stageVariance(rankine, { vines: 25, perVine: 1 })), 0.25, 1e-9);
    expectRelative(Math.sqrt(stageVariance(rankine, { vines: 21, perVine: 2 })), 0.25, 1e-9);
    expectRelative(bestPerVine(Math.sqrt(0.5 / 1.0625), { perVine: 4, perCluster: 1 }), 1.37, 2e-3);
    expect(bestSplit({ variances: rankine, costs: { perVine: 4, perCluster: 1 }, target: { variance: 0.0625 } })).toMatchObject({ perVine: 1, vines: 25 });
  });
});

describe('two stages where the vines run out', () => {
  it('gives the parts behind the statement of Rankine, Cellier and Boehm about plots of 200 vines', () => {
    // Am. J. Enol. Vitic. 13:58 (1962): 0.25 % from one cluster of each of 25 vines, or two of each of 21, of 200.
    // Both equations hold for S_b² = 1.0625/0.915 and S_w² = 1.5625 − 0.875 S_b² (by hand; 1.1612 and 0.5464 with R 4.2.2).
    const betweenVines = 1.0625 / 0.915;
    const variances = { betweenVines, withinVine: 1.5625 - 0.875 * betweenVines };
    expectRelative(variances.betweenVines, 1.1612, 1e-5);
    expectRelative(variances.withinVine, 0.5464, 1e-4);
    expectRelative(Math.sqrt(stageVariance(variances, { vines: 25, of: 200, perVine: 1 })), 0.25, 1e-12);
    expectRelative(Math.sqrt(stageVariance(variances, { vines: 21, of: 200, perVine: 2 })), 0.25, 1e-12);
    // Every vine read leaves what differs within vines.
    expectRelative(stageVariance(variances, { vines: 200, of: 200, perVine: 2 }), variances.withinVine / 400, 1e-12);
  });
});

describe('vines, clusters and berries', () => {
  const variances = { betweenVines: 0.5, withinVine: 0.9, withinCluster: 2 };
  const costs = { perVine: 3, perCluster: 1, perBerry: 0.05 };

  it('gives the variance and the best numbers of three stages', () => {
    // Cochran 1977 ch. 10, computed with R 4.2.2
    expectRelative(stageVariance(variances, { vines: 20, perVine: 2, perCluster: 5 }), 0.0575, 1e-12);
    expectRelative(stageVariance(variances, { vines: 20, perVine: 1, perCluster: 5 }), 0.09, 1e-12);
    expectRelative(bestPerVine(Math.sqrt(0.9 / 0.5), costs), 2.32379, 1e-6);
    expectRelative(bestPerCluster(variances, costs), 6.666667, 1e-6);
  });

  it('is not beaten by any other whole split by more than the flatness it forgives', () => {
    const split = bestSplit({ variances, costs, target: { variance: 0.05 } });
    for (let perVine = 1; perVine <= 8; perVine++)
      for (let perCluster = 1; perCluster <= 20; perCluster++) {
        const vines = Math.ceil(stageVariance(variances, { vines: 1, perVine, perCluster }) / 0.05);
        expect(split.cost).toBeLessThanOrEqual(stageCost(costs, { vines, perVine, perCluster }) * 1.01);
      }
    expect(split.variance).toBeLessThanOrEqual(0.05);
  });

  it('takes few berries of one cluster where the clusters of a vine hardly differ', () => {
    // √(c_cluster S_e² / (c_berry S_w²)) = 20 berries go with 0.1 clusters. Of one whole cluster, C V = (c_vine + c_cluster + k c_berry)
    // (S_b² + S_w² + S_e² / k) is least at k = √((c_vine + c_cluster) S_e² / (c_berry (S_b² + S_w²))) = 2.81.
    const alike = { betweenVines: 1, withinVine: 0.01, withinCluster: 0.4 };
    const split = bestSplit({ variances: alike, costs: { perVine: 40, perCluster: 40, perBerry: 4 }, target: { variance: 0.0101 }, maximumPerVine: 30, maximumPerCluster: 200 });
    expectRelative(bestPerCluster(alike, { perVine: 40, perCluster: 40, perBerry: 4 }), 20);
    expect(split.perVine).toBe(1);
    expect(split.perCluster).toBeGreaterThanOrEqual(2);
    expect(split.perCluster).toBeLessThanOrEqual(4);
  });

  it('does not go below the vines that a plan takes in any case', () => {
    const split = bestSplit({ variances, costs, target: { variance: 5 }, minimumVines: 5 });
    expect(split).toMatchObject({ vines: 5, perVine: 1, perCluster: 1 });
  });

  it('takes no more clusters than a vine carries', () => {
    const split = bestSplit({ variances, costs, target: { variance: 0.05 }, maximumPerVine: 1 });
    expect(split.perVine).toBe(1);
  });

  it('refuses what it cannot split', () => {
    expect(() => bestSplit({ variances, costs, target: { budget: 5 } })).toThrow('does not pay for two vines');
    expect(() => bestSplit({ variances: { betweenVines: 0, withinVine: 1 }, costs, target: { budget: 50 } })).toThrow('between vines');
  });
});
