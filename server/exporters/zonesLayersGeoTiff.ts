import { geoTiffBytes } from './geoTiffBytes.ts';
import type { ZoneExport } from './zoneExport.ts';

/** The layers that the zones were made from, a band each on the block's grid, with their names and units; cells without a value are NaN. */
export function zonesLayersGeoTiff({ blockName, layers, cells }: ZoneExport): Buffer {
  return geoTiffBytes({
    width: cells.cols, height: cells.rows, bands: layers.map((layer) => layer.cells), epsg: cells.epsg, originX: cells.x0, originY: cells.y0, pixelSize: cells.cellSizeM, noData: Number.NaN,
    description: `${blockName}: ${layers.map(({ name, unit }) => (unit === '' ? name : `${name}, ${unit}`)).join('; ')}`,
    bandNames: layers.map(({ name, unit }) => ({ name, unit })),
  });
}
