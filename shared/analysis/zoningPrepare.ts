/**
 * From layers to columns of numbers that k-means can compare: smoothed, standardised, weighted. Weights multiply squared
 * distances (values by √weight). Classes become one column a class; two cells of different class are then √weight apart.
 * In: layers in their own units. Out: prepared layers, weights, columns. Cost: a few passes over the cells a layer.
 */

import { layerTypes } from '../catalog/layerTypes.ts';
import { AnalysisError } from './analysisError.ts';
import { coverageOf } from './layerStats.ts';
import type { Cells, Grid } from './grid.ts';
import type { LayerAdvice } from './layerAdvice.ts';
import { smooth } from './smooth.ts';
import { standardise } from './standardise.ts';
import type { ZoningLayer, ZoningOptions, ZoningWarning } from './zoningTypes.ts';

/** A layer that covers less than this cannot speak for the block; below the second share the person is told. */
const LEAST_COVERAGE = 0.5;
const GOOD_COVERAGE = 0.9;

export interface PreparedLayer extends ZoningLayer {
  /** Smoothed cells of a picture that shows rows, the given ones of any other layer. */
  readonly smoothed: Cells;
  readonly standardised: Cells;
}

export interface PreparedLayers {
  readonly layers: readonly PreparedLayer[];
  readonly warnings: readonly ZoningWarning[];
}

/** Leaves out layers that are the same everywhere. Throws AnalysisError when a layer covers too little or none is left. */
export function prepareLayers(grid: Grid, layers: readonly ZoningLayer[], options: ZoningOptions): PreparedLayers {
  const warnings: ZoningWarning[] = [];
  const kept: PreparedLayer[] = [];
  for (const layer of layers) {
    const coverage = coverageOf(grid, layer.cells);
    if (coverage < LEAST_COVERAGE) {
      throw new AnalysisError('layer-coverage', `Layer "${layer.name ?? layer.id}" covers ${Math.round(coverage * 100)} % of the block; ${LEAST_COVERAGE * 100} % is needed. Leave it out or import one that covers the block.`);
    }
    if (coverage < GOOD_COVERAGE) warnings.push({ code: 'layer-coverage', about: layer.id, figures: { coverage, limit: GOOD_COVERAGE } });
    const prepared = prepareLayer(grid, layer, options);
    if (prepared === null) warnings.push({ code: 'layer-constant', about: layer.id, figures: {} });
    else kept.push(prepared);
  }
  if (kept.length === 0) throw new AnalysisError('no-layer', 'No layer is left that differs within the block; choose another layer.');
  return { layers: kept, warnings };
}

function prepareLayer(grid: Grid, layer: ZoningLayer, { smoothingM, standardise: method }: ZoningOptions): PreparedLayer | null {
  const showsRows = layerTypes.find(({ id }) => id === layer.type)?.showsRows ?? false;
  const isSmoothed = showsRows && layer.kind === 'number' && smoothingM > 0;
  const smoothed = isSmoothed ? smooth(grid, layer.cells, { sigmaM: smoothingM, fillMissing: true }) : layer.cells;
  if (layer.kind === 'class') return new Set(insideValues(grid, layer.cells)).size < 2 ? null : { ...layer, smoothed, standardised: smoothed };
  const { cells, scale } = standardise(grid, smoothed, { method });
  return scale > 0 ? { ...layer, smoothed, standardised: cells } : null;
}

function insideValues(grid: Grid, cells: Cells): Float32Array {
  return cells.filter((value, cell) => grid.inside[cell] === 1 && !Number.isNaN(value));
}

/** The person's weight where one is given, the advised one elsewhere. Throws when nothing is left. */
export function decideWeights(layers: readonly PreparedLayer[], advised: readonly LayerAdvice[]): number[] {
  const weights = layers.map((layer, l) => layer.weight ?? advised[l]!.weight);
  if (weights.some((weight) => !(weight >= 0) || !Number.isFinite(weight))) {
    throw new AnalysisError('weight', 'A weight must be 0 or a number above it.');
  }
  if (!weights.some((weight) => weight > 0)) throw new AnalysisError('no-layer', 'Every layer has weight 0; give at least one a weight above it.');
  return weights;
}

/** Standardised columns times √weight; layers of weight 0 give none. NaN where missing. */
export function weightedColumns(grid: Grid, layers: readonly PreparedLayer[], weights: readonly number[]): Float32Array[] {
  return layers.flatMap((layer, l) => {
    const weight = weights[l]!;
    if (weight === 0) return [];
    if (layer.kind === 'number') return [weight === 1 ? layer.standardised : layer.standardised.map((value) => value * Math.sqrt(weight))];
    const classes = [...new Set(insideValues(grid, layer.cells))].sort((a, b) => a - b);
    const height = Math.sqrt(weight / 2);
    return classes.map((code) => layer.standardised.map((value) => (Number.isNaN(value) ? NaN : value === code ? height : 0)));
  });
}
