import { geoTiffBytes } from './geoTiffBytes.ts';
import type { ZoneExport } from './zoneExport.ts';

/** Zone numbers cell by cell as a GeoTIFF in the block's UTM zone; 0 is outside. */
export function zonesGeoTiff({ blockName, zones, cells }: ZoneExport): Buffer {
  const named = zones.map(({ number, name }) => `${number} ${name}`.trim()).join('; ');
  return geoTiffBytes({ width: cells.cols, height: cells.rows, bands: [cells.labels], epsg: cells.epsg, originX: cells.x0, originY: cells.y0, pixelSize: cells.cellSizeM, noData: 0, description: `${blockName}: zone numbers. ${named}` });
}
