/**
 * Where the ground lies that stands out from a block that is otherwise one and that no number of zones shows: without it a person
 * would have to find a few hundred square metres by eye. In: its parts on the coarse plane they were found on, and the block as one
 * zone. Out: one multipolygon of all parts within the block's own outline. Cost: cells plus border length.
 */

import type { MultiPolygonLonLat } from '../geo/coordinates.ts';
import { polygonise } from './polygonise.ts';
import { partsOn, type StandingOut } from './verdictStandOut.ts';
import type { CellZones } from './zoningFit.ts';
import type { StackedBlocks } from './zoningTogether.ts';

const [REST, APART] = [1, 2];

/** Null where all of it lies in another of several blocks zoned together. */
export function standOutGround(ground: StandingOut, { whole, stacked }: { whole: CellZones; stacked: StackedBlocks }): MultiPolygonLonLat | null {
  const partAt = partsOn(ground, stacked.grid);
  const marked = Uint8Array.from(whole.labels, (label, cell) => (label === 0 ? 0 : partAt(cell) > 0 ? APART : REST));
  const { labels } = stacked.own.zonesOf({ ...whole, labels: marked });
  return labels.includes(APART) ? (polygonise(stacked.own.block.grid, labels).find(({ zone }) => zone === APART)?.polygonsLonLat ?? null) : null;
}
