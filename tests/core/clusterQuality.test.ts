import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { adjustedRandIndex, averageRanks, correlation, randIndex, rankCorrelation } from '../../shared/analysis/agreement.ts';
import { calinskiHarabasz, daviesBouldin, describePartition, varianceExplained } from '../../shared/analysis/clusterQuality.ts';
import { silhouettes, silhouettesByPoint } from '../../shared/analysis/clusterQualitySilhouette.ts';
import { halfSplitStability } from '../../shared/analysis/clusterQualityStability.ts';
import { fitFuzzy, fuzziness, membershipDoubt, membershipsFrom } from '../../shared/analysis/fuzzy.ts';
import { fitKMeans } from '../../shared/analysis/kmeans.ts';
import { pointTable } from '../../shared/analysis/kmeansPoints.ts';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';

const table = readFileSync(new URL('../fixtures/tables/iris.csv', import.meta.url), 'utf8')
  .trim()
  .split('\n')
  .slice(1)
  .map((line) => line.split(',').map(Number));
const iris = pointTable(table.map((row) => row.slice(0, 4)));
const species = table.map((row) => row[4]!);
const nine = pointTable([[1, 1], [1, 2], [2, 1], [8, 8], [8, 9], [9, 8], [1, 9], [2, 9], [1, 8]]);
const corners = [0, 0, 0, 1, 1, 1, 2, 2, 2];

describe('quality of a partition', () => {
  // Raw iris: R 4.2.2 (stats, cluster 2.1.4) and scikit-learn 1.2.1 agree on every figure.
  it.each([
    [2, 0.77641, 0.681046, 513.9245, 0.404293, 0.539922],
    [3, 0.884275, 0.552819, 561.6278, 0.661972, 0.730238],
    [4, 0.91601, 0.498051, 530.7658, 0.780307, 0.649818],
    [5, 0.931834, 0.488749, 495.5415, 0.805965, 0.607896],
    [6, 0.942704, 0.364834, 473.8506, 0.914158, 0.447534],
  ])('matches R and scikit-learn on iris cut into %i', (k, explained, silhouette, separation, compactness, withSpecies) => {
    const { labels } = fitKMeans(iris, { k, random: seededRandom(2) });
    const partition = describePartition(iris, labels, k);
    expect(partition.total).toBeCloseTo(681.3706, 4);
    expect(varianceExplained(partition)).toBeCloseTo(explained, 6);
    expect(silhouettes(iris, [labels])[0]).toBeCloseTo(silhouette, 5);
    expect(calinskiHarabasz(partition)).toBeCloseTo(separation, 3);
    expect(daviesBouldin(iris, labels, partition)).toBeCloseTo(compactness, 5);
    expect(adjustedRandIndex(species, labels)).toBeCloseTo(withSpecies, 6);
  });

  it('gives the species of iris their known figures', () => {
    const partition = describePartition(iris, species, 3);
    expect(silhouettes(iris, [species])[0]).toBeCloseTo(0.503477, 6);
    expect(calinskiHarabasz(partition)).toBeCloseTo(487.3309, 3);
    expect(daviesBouldin(iris, species, partition)).toBeCloseTo(0.751371, 6);
  });

  it('gives each of three zones of iris its part, as R does', () => {
    // R 4.2.2: kmeans()$withinss, cluster::silhouette means by zone, Rand index, table(species, zone).
    const { labels } = fitKMeans(iris, { k: 3, random: seededRandom(2) });
    const { sizes, withinByZone } = describePartition(iris, labels, 3);
    const silhouette = silhouettesByPoint(iris, [labels])[0]!;
    const zones = [0, 1, 2].sort((a, b) => sizes[a]! - sizes[b]!);
    const meanSilhouette = (zone: number) => silhouette.reduce((sum, value, i) => sum + (labels[i] === zone ? value : 0), 0) / sizes[zone]!;
    expect(zones.map((zone) => sizes[zone])).toEqual([38, 50, 62]);
    [23.879474, 15.151, 39.820968].forEach((within, at) => expect(withinByZone[zones[at]!]).toBeCloseTo(within, 5));
    [0.451105, 0.79814, 0.41732].forEach((mean, at) => expect(meanSilhouette(zones[at]!)).toBeCloseTo(mean, 5));
    expect(randIndex(species, labels)).toBeCloseTo(0.879732, 6);
    const together = (kind: number) => zones.map((zone) => species.filter((own, i) => own === kind && labels[i] === zone).length);
    expect([...new Set(species)].map(together)).toEqual([[0, 50, 0], [2, 0, 48], [36, 0, 14]]);
  });

  it('has an inertia of standardised iris that depends on the divisor of the deviation, and zones that do not', () => {
    // R 4.2.2 scale() divides by n − 1, scikit-learn's StandardScaler by n.
    const scaled = (divisor: number) => {
      const columns = [0, 1, 2, 3].map((f) => {
        const values = table.map((row) => row[f]!);
        const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
        const sd = Math.sqrt(values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / divisor);
        return values.map((value) => (value - mean) / sd);
      });
      return pointTable(table.map((_, i) => columns.map((column) => column[i]!)));
    };
    const fits = [150, 149].map((divisor) => {
      const points = scaled(divisor);
      const { labels } = fitKMeans(points, { k: 3, random: seededRandom(2) });
      return { labels, within: describePartition(points, labels, 3).within };
    });
    expect(fits[0]!.within).toBeCloseTo(139.820496, 5);
    expect(fits[1]!.within).toBeCloseTo(138.88836, 5);
    expect(adjustedRandIndex(fits[0]!.labels, fits[1]!.labels)).toBe(1);
  });

  it('separates six figures in two lots 3750-fold', () => {
    // By hand: between 37.50 over one degree of freedom, within 0.04 over four.
    const six = pointTable([[0], [0.1], [0.2], [5], [5.1], [5.2]]);
    expect(calinskiHarabasz(describePartition(six, [0, 0, 0, 1, 1, 1], 2))).toBeCloseTo(3750, 6);
  });

  it('gives the nine points in three corners the figures of scikit-learn', () => {
    const partition = describePartition(nine, corners, 3);
    expect(partition.within).toBeCloseTo(4, 9);
    expect(partition.total).toBeCloseTo(204.888889, 6);
    expect(calinskiHarabasz(partition)).toBeCloseTo(150.666667, 6);
    expect(daviesBouldin(nine, corners, partition)).toBeCloseTo(0.183895896, 8);
    const expected = [0.869917, 0.819575, 0.843459, 0.851145, 0.819575, 0.843459, 0.864458, 0.810935, 0.819575];
    expect(silhouettes(nine, [corners])[0]).toBeCloseTo(0.838010857, 8);
    expected.forEach((value, i) => expect(silhouettesByPoint(nine, [corners])[0]![i]).toBeCloseTo(value, 6));
  });

  it('scores several labellings in one pass as it does one by one', () => {
    const other = [0, 0, 1, 1, 1, 1, 0, 0, 0];
    expect(silhouettes(nine, [corners, other])).toEqual([...silhouettes(nine, [corners]), ...silhouettes(nine, [other])]);
  });

  it('says of one zone that nothing is explained and that separation has no meaning', () => {
    const partition = describePartition(nine, new Uint8Array(9), 1);
    expect(varianceExplained(partition)).toBeCloseTo(0, 12);
    expect(calinskiHarabasz(partition)).toBeNaN();
    expect(silhouettes(nine, [new Uint8Array(9)])[0]).toBeNaN();
  });

  it('is steady over random halves for clear groups and unsteady for one cloud', () => {
    const random = seededRandom(4);
    const cloud = pointTable(Array.from({ length: 300 }, () => [randomNormal(random), randomNormal(random)]));
    const groups = pointTable(Array.from({ length: 300 }, (_, i) => [randomNormal(random) + 12 * (i % 3), randomNormal(random)]));
    expect(halfSplitStability(groups, { k: 3, random })).toBeCloseTo(1, 2);
    expect(halfSplitStability(cloud, { k: 3, random })).toBeLessThan(0.85);
  });
});

describe('agreement of two labellings', () => {
  // scikit-learn 1.2.1 adjusted_rand_score and rand_score.
  it.each([
    [[0, 0, 1, 1], [0, 0, 1, 2], 0.571428571],
    [[0, 0, 1, 1], [0, 1, 0, 1], -0.5],
    [[0, 0, 0, 0], [0, 1, 2, 3], 0],
    [[0, 0, 0, 1, 1, 1, 2, 2, 2], [0, 0, 1, 1, 1, 2, 2, 2, 2], 0.357142857],
    [[0, 0, 1, 1], [5, 5, 2, 2], 1],
  ])('of %j and %j is %d', (first, second, expected) => {
    expect(adjustedRandIndex(first, second)).toBeCloseTo(expected, 8);
  });

  it('has the plain Rand index of 0.75 on the nine items', () => {
    expect(randIndex([0, 0, 0, 1, 1, 1, 2, 2, 2], [0, 0, 1, 1, 1, 2, 2, 2, 2])).toBeCloseTo(0.75, 12);
  });

  it('refuses labellings of different items', () => {
    expect(() => adjustedRandIndex([0, 1], [0, 1, 1])).toThrow(/2 and 3 items/);
  });

  it('shares tied ranks and correlates by rank', () => {
    expect([...averageRanks([10, 20, 20, 5])]).toEqual([2, 3.5, 3.5, 1]);
    expect(rankCorrelation([1, 2, 3, 4], [1, 4, 9, 16])).toBeCloseTo(1, 12);
    expect(correlation([1, 2, 3], [5, 5, 5])).toBeNaN();
    // Six times a sixth of 4 is not 4: two columns without spread would be wholly alike.
    expect(correlation([4, 4, 4, 4, 4, 4], [4.1, 4.1, 4.1, 4.1, 4.1, 4.1])).toBeNaN();
  });
});

describe('fuzzy membership', () => {
  const memberships = Float64Array.from([0.9, 0.05, 0.05, 0.8, 0.15, 0.05, 0.1, 0.85, 0.05, 0.05, 0.9, 0.05, 0.1, 0.2, 0.7, 1 / 3, 1 / 3, 1 / 3]);

  it('measures fuzziness in the direction in which 0 is crisp', () => {
    // Worked by hand from the definitions; the opposite print of FPI in the literature would be 0.4758.
    const { partitionCoefficient, fpi, entropy, nce, entropyShare } = fuzziness(memberships, 3);
    expect(partitionCoefficient).toBeCloseTo(0.650555556, 8);
    expect(fpi).toBeCloseTo(0.524166667, 8);
    expect(entropy).toBeCloseTo(0.636713648, 8);
    expect(entropyShare).toBeCloseTo(0.579561739, 8);
    // Odeh, McBratney & Chittleborough 1992: over 1 − 3/6, which six points make larger than one.
    expect(nce).toBeCloseTo(1.273427297, 8);
    expect(fuzziness(Float64Array.from([1, 0, 0, 1]), 2).nce).toBeNaN();
    expect(fuzziness(Float64Array.from([1, 0, 0, 1]), 2).fpi).toBe(0);
  });

  it('settles on iris where e1071 1.7-13 does', () => {
    const start = fitKMeans(iris, { k: 3, random: seededRandom(1) }).centres;
    const fit = fitFuzzy(iris, { start });
    const figures = fuzziness(fit.memberships, 3);
    // e1071 stops on a relative change of the objective of 1.5e-8, which leaves its last digits open.
    expect(figures.partitionCoefficient).toBeCloseTo(0.783394631, 5);
    expect(figures.fpi).toBeCloseTo(0.324908053, 5);
    expect(figures.entropy).toBeCloseTo(0.395493628, 5);
    expect(figures.entropyShare).toBeCloseTo(0.359993814, 5);
    expect(figures.nce).toBeCloseTo(0.403564927, 5);
    expect(fit.objective / 150).toBeCloseTo(0.403371408, 6);
    const byPetal = [0, 1, 2].map((zone) => [...fit.centres.slice(zone * 4, zone * 4 + 4)]).sort((a, b) => a[2]! - b[2]!);
    const expected = [5.00397, 3.41409, 1.48281, 0.25354, 5.88886, 2.76104, 4.36384, 1.39726, 6.77492, 3.05236, 5.64667, 2.0535];
    byPetal.flat().forEach((value, i) => expect(Math.abs(value / expected[i]! - 1)).toBeLessThan(1e-4));
  });

  it('belongs by the inverse squared distance, and wholly to a centre it sits on', () => {
    const shares = membershipsFrom(pointTable([[1], [3]]), Float64Array.from([0, 3]));
    [0.8, 0.2, 0, 1].forEach((value, i) => expect(shares[i]).toBeCloseTo(value, 12));
  });

  it('doubts most where two zones are equally near', () => {
    const doubt = membershipDoubt(memberships, 3);
    expect(doubt[5]).toBeCloseTo(1, 6);
    expect(doubt[0]).toBeCloseTo(0.05 / 0.9, 6);
  });
});
