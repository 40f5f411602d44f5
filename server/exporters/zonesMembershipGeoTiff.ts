import { confusionAt, NO_MEMBERSHIP, WHOLE_MEMBERSHIP } from '../../shared/analysis/zoneMemberships.ts';
import { geoTiffBytes } from './geoTiffBytes.ts';
import type { ZoneExport } from './zoneExport.ts';

/** How far each cell belongs to each zone, a band a zone in the order of their numbers, and last the confusion index; cells without are NaN. */
export function zonesMembershipGeoTiff({ blockName, memberships, cells }: ZoneExport): Buffer {
  const shares = memberships!.map((band) => Float32Array.from(band, (step) => (step === NO_MEMBERSHIP ? Number.NaN : step / WHOLE_MEMBERSHIP)));
  const confusion = Float32Array.from({ length: cells.labels.length }, (_, cell) => confusionAt(memberships!, cell));
  return geoTiffBytes({
    width: cells.cols, height: cells.rows, bands: [...shares, confusion], epsg: cells.epsg, originX: cells.x0, originY: cells.y0, pixelSize: cells.cellSizeM, noData: Number.NaN,
    description: `${blockName}: membership of each zone as the run found them (fuzzy c-means, exponent 2), in steps of ${1 / WHOLE_MEMBERSHIP}; confusion index 1 - (first - second), Burrough et al. 1997`,
    bandNames: [...shares.map((_, at) => ({ name: `membership ${at + 1}`, unit: '' })), { name: 'confusion index', unit: '' }],
  });
}
