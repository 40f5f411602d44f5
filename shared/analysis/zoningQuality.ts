/**
 * Figures that compare one to six zones, on fixed samples of cells so that they cost the same for any block.
 * In: feature table and fits. Out: one row for each k; figures without meaning are null.
 */

import { calinskiHarabasz, daviesBouldin, describePartition, totalSquares, varianceExplained } from './clusterQuality.ts';
import { silhouettes } from './clusterQualitySilhouette.ts';
import { halfSplitStability } from './clusterQualityStability.ts';
import { fuzziness, membershipsFrom } from './fuzzy.ts';
import { assignToCentres } from './kmeans.ts';
import { sampleIndices, selectPoints } from './kmeansPoints.ts';
import { streamOf, type FeatureTable, type ZoneFit } from './zoningFit.ts';
import type { ZoneEvidence } from './zoningTypes.ts';

const SAMPLE = 1000;
const SAMPLE_STREAM = 30;

export type FitQuality = Pick<
  ZoneEvidence,
  'k' | 'varianceExplained' | 'silhouette' | 'calinskiHarabasz' | 'daviesBouldin' | 'stability' | 'fuzzinessIndex' | 'classificationEntropy' | 'inertia'
>;

export function rateFits({ points }: FeatureTable, fits: readonly ZoneFit[], seed: number): FitQuality[] {
  const sample = selectPoints(points, sampleIndices(points.count, SAMPLE, streamOf(seed, SAMPLE_STREAM)));
  const several = fits.filter(({ k }) => k > 1);
  const silhouetteOf = silhouettes(sample, several.map(({ centres }) => assignToCentres(sample, centres)));
  const total = totalSquares(points);
  return fits.map((fit) => {
    const partition = describePartition(points, fit.labels, fit.k, total);
    const common = { k: fit.k, inertia: fit.inertia, varianceExplained: varianceExplained(partition) };
    if (fit.k === 1) return { ...common, silhouette: null, calinskiHarabasz: null, daviesBouldin: null, stability: null, fuzzinessIndex: null, classificationEntropy: null };
    const { fpi, entropyShare } = fuzziness(membershipsFrom(sample, fit.centres), fit.k);
    return {
      ...common,
      silhouette: finite(silhouetteOf[several.indexOf(fit)]!),
      calinskiHarabasz: finite(calinskiHarabasz(partition)),
      daviesBouldin: finite(daviesBouldin(points, fit.labels, partition)),
      stability: finite(halfSplitStability(sample, { k: fit.k, random: streamOf(seed, SAMPLE_STREAM + fit.k), splits: 2, restarts: 3 })),
      fuzzinessIndex: fpi,
      classificationEntropy: entropyShare,
    };
  });
}

function finite(value: number): number | null {
  return Number.isFinite(value) ? value : null;
}
