/** What a person may choose of a zoning, its defaults, and the check of both options and input. */

import { polygonsArea } from '../geo/rings.ts';
import { AnalysisError } from './analysisError.ts';
import { assertCellCount } from './grid.ts';
import { MOST_PATCH_HA, smallestPatchFor } from './smallestPatch.ts';
import { MOST_ZONES } from './verdictGap.ts';
import type { ZoningInput, ZoningOptions } from './zoningTypes.ts';

export const defaultZoningOptions: ZoningOptions = {
  zones: 'advise',
  standardise: 'plain',
  smoothingM: 3,
  smallestPatchHa: MOST_PATCH_HA,
  narrowestM: 0,
  borders: 'free',
  principalComponents: false,
  seed: 1,
  drawAll: false,
  memberships: false,
};

/** Defaults filled in and every option checked; layers and readings are checked against the grid. */
export function checkedOptions({ grid, layers, options = {}, readings = [], together = [], planting }: ZoningInput): ZoningOptions {
  const all = { ...defaultZoningOptions, smallestPatchHa: smallestPatchFor(polygonsArea(grid.outlineXY)), ...options };
  if (all.zones !== 'advise' && !(Number.isInteger(all.zones) && all.zones >= 1 && all.zones <= MOST_ZONES)) {
    throw new AnalysisError('zones', `${all.zones} zones cannot be made; ask for advise or a whole number from 1 to ${MOST_ZONES}.`);
  }
  if (!(all.smoothingM >= 0 && all.smoothingM <= 50)) throw new AnalysisError('smoothing', `A smoothing of ${all.smoothingM} m cannot be used; give 0 to 50 m.`);
  if (!(all.smallestPatchHa >= 0)) throw new AnalysisError('smallest-patch', `A smallest patch of ${all.smallestPatchHa} ha cannot be used; give 0 or more.`);
  if (!(all.narrowestM >= 0 && all.narrowestM <= 200)) throw new AnalysisError('narrowest', `A narrowest part of ${all.narrowestM} m cannot be used; give 0 to 200 m.`);
  if (all.borders !== 'free' && !(planting && planting.vines.count > 0)) throw new AnalysisError('no-rows', 'Borders cannot follow the rows while the block has none; lay out its rows, or leave the borders free.');
  if (!Number.isInteger(all.seed)) throw new AnalysisError('seed', `The seed ${all.seed} cannot be used; give a whole number.`);
  if (layers.length === 0) throw new AnalysisError('no-layer', 'No layer was chosen; choose at least one.');
  const ids = new Set<string>();
  for (const layer of layers) {
    assertCellCount(grid, layer.cells, `Layer "${layer.name ?? layer.id}"`);
    if (ids.has(layer.id)) throw new AnalysisError('layer-twice', `Layer "${layer.name ?? layer.id}" was given twice; give each a name of its own.`);
    ids.add(layer.id);
  }
  for (const block of together) for (const layer of block.layers) assertCellCount(block.grid, layer.cells, `Layer "${layer.name ?? layer.id}"`);
  for (const { measure, values } of readings) {
    if (values.some(({ value }) => !Number.isFinite(value))) throw new AnalysisError('reading', `A reading of "${measure}" is not a number; correct or remove it.`);
  }
  return all;
}
