import { cellAt, defineGrid } from '../../../shared/analysis/grid.ts';
import { certaintyOf, membershipAt, partedBands, type CellMembership } from '../../../shared/analysis/zoneMemberships.ts';
import type { ZoningMemberships } from '../../../shared/contracts/zonings.ts';
import type { MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import { zoneStyle } from '../../lib/colours.ts';
import { cornersOfGrid } from '../../lib/layerPicture.ts';
import type { MapRaster } from '../map/mapTypes.ts';

/** What cannot be told of a place: it lies outside the block, or a layer is missing there. */
export type Reading = CellMembership | 'outside' | 'missing';

export interface CertaintyPicture {
  readonly raster: MapRaster;
  readonly changedByHand: boolean;
  /** Zones of the run, with the colours that they have on the picture. */
  readonly zones: readonly { readonly zone: number; readonly colour: string }[];
  readonly read: (place: readonly [lon: number, lat: number]) => Reading;
}

/** The least of a zone's colour that is left where two zones fit alike: it still tells which of them it was given to. */
export const faintest = 0.15;

const bytesOf = (text: string) => Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));

/** A run's zones in their colours, the greyer the less certain. `own`: colours that people gave zones, by number. */
export function certaintyPicture(block: { readonly boundary: { readonly coordinates: unknown }; readonly cellSizeM: number }, { changedByHand, labels: zones, memberships }: ZoningMemberships, own: Readonly<Record<number, string>>): CertaintyPicture {
  const grid = defineGrid(block.boundary.coordinates as MultiPolygonLonLat, block.cellSizeM);
  const labels = bytesOf(zones);
  const bands = partedBands(bytesOf(memberships), labels.length);
  // A number that was changed by hand need not mean the zone that the run called so.
  const colours = bands.map((_, at) => ({ zone: at + 1, colour: (changedByHand ? undefined : own[at + 1]) ?? zoneStyle(at + 1, { count: bands.length }).fill }));
  const strength = Float32Array.from(labels, (zone, cell) => {
    const here = membershipAt(bands, cell, zone);
    return here === null ? 0 : faintest + (1 - faintest) * certaintyOf(here);
  });
  return {
    raster: {
      id: 'certainty', cells: Float32Array.from(labels, (zone) => (zone === 0 ? Number.NaN : zone)), strength, columns: grid.cols, rows: grid.rows, cornersLonLat: cornersOfGrid(grid),
      ramp: 'classes', range: [0, 1], own: Object.fromEntries(colours.map(({ zone, colour }) => [zone, colour])),
    },
    changedByHand,
    zones: colours,
    read: (place) => {
      const cell = cellAt(grid, toUtm(place, grid.epsg));
      const zone = cell < 0 ? 0 : labels[cell]!;
      return zone === 0 ? 'outside' : (membershipAt(bands, cell, zone) ?? 'missing');
    },
  };
}
