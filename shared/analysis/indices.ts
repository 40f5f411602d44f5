/**
 * Vegetation indices as a table: bands needed and formula. Reflectances 0…1; digital numbers give comparable patterns
 * within one picture only, and the soil-adjusted forms need true reflectance.
 * Bands are averaged onto the grid first, then the index is taken: sums of digital numbers stay exact that way.
 */
import { AnalysisError } from './analysisError.ts';
import type { Cells } from './grid.ts';

export type BandName = 'nir' | 'red' | 'green' | 'redEdge';

export interface VegetationIndex {
  readonly bands: readonly BandName[];
  /** From the bands in the order named; NaN where it has no meaning. */
  readonly of: (first: number, second: number) => number;
}

/**
 * Sources: ndvi Rouse 1974; gndvi Gitelson 1996; ndre Barnes 2000; ratio Jordan 1969; savi Huete 1988 with L = 0.5; osavi
 * Rondeaux 1996, here with the leading factor 1.16 and, as osaviPlain, without; msavi2 Qi 1994.
 */
export const INDICES = {
  ndvi: { bands: ['nir', 'red'], of: normalisedDifference },
  gndvi: { bands: ['nir', 'green'], of: normalisedDifference },
  ndre: { bands: ['nir', 'redEdge'], of: normalisedDifference },
  ratio: { bands: ['nir', 'red'], of: (nir, red) => (red > 0 && nir >= 0 ? nir / red : NaN) },
  savi: { bands: ['nir', 'red'], of: (nir, red) => (nir + red > 0 ? (1.5 * (nir - red)) / (nir + red + 0.5) : NaN) },
  osavi: { bands: ['nir', 'red'], of: (nir, red) => (nir + red > 0 ? (1.16 * (nir - red)) / (nir + red + 0.16) : NaN) },
  osaviPlain: { bands: ['nir', 'red'], of: (nir, red) => (nir + red > 0 ? (nir - red) / (nir + red + 0.16) : NaN) },
  msavi2: { bands: ['nir', 'red'], of: (nir, red) => (nir + red > 0 ? (2 * nir + 1 - Math.sqrt((2 * nir + 1) ** 2 - 8 * (nir - red))) / 2 : NaN) },
} as const satisfies Record<string, VegetationIndex>;

export type IndexId = keyof typeof INDICES;

/** Index of one place: `indexAt('ndvi', { nir: 0.45, red: 0.05 })` is 0.8. */
export function indexAt(id: IndexId, bands: Partial<Record<BandName, number>>): number {
  const index: VegetationIndex = INDICES[id];
  const [first, second] = index.bands.map((band) => bands[band] ?? NaN);
  return index.of(first!, second!);
}

/** Index of every cell; NaN where a band is missing. Throws AnalysisError when a band it needs is not given. */
export function indexCells(id: IndexId, bands: Partial<Record<BandName, Cells>>): Cells {
  const index: VegetationIndex = INDICES[id];
  const [first, second] = index.bands.map((name) => {
    const band = bands[name];
    if (band === undefined) throw new AnalysisError('band-missing', `The index ${id} needs the bands ${index.bands.join(' and ')}; say which band of the file is ${name}.`);
    return band;
  });
  return first!.map((value, cell) => index.of(value, second![cell]!));
}

/** Within −1…1 for reflectances; negative reflectances, which some corrections leave, are held to that range. */
function normalisedDifference(high: number, low: number): number {
  return high + low > 0 ? Math.min(1, Math.max(-1, (high - low) / (high + low))) : NaN;
}
