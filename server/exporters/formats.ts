import type { ZoneExport } from './zoneExport.ts';
import { zonesGeoJson } from './zonesGeoJson.ts';
import { zonesGeoPackage } from './zonesGeoPackage.ts';
import { zonesGeoTiff } from './zonesGeoTiff.ts';
import { zonesKml } from './zonesKml.ts';
import { zonesLayersGeoTiff } from './zonesLayersGeoTiff.ts';
import { zonesRowTable } from './zonesRowTable.ts';
import { zonesShapefile } from './zonesShapefile.ts';

export interface ExportFormat {
  id: string;
  mediaType: string;
  extension: string;
  /** Wants the cells of the layers too. */
  withLayers?: boolean;
  write: (input: ZoneExport) => Buffer | Promise<Buffer>;
}

/** One row a format that zones leave in; the route, the menu and the checks read this table. */
export const exportFormats: readonly ExportFormat[] = [
  { id: 'geojson', mediaType: 'application/geo+json', extension: 'geojson', write: zonesGeoJson },
  { id: 'shapefile', mediaType: 'application/zip', extension: 'zip', write: zonesShapefile },
  { id: 'geopackage', mediaType: 'application/geopackage+sqlite3', extension: 'gpkg', write: zonesGeoPackage },
  { id: 'kml', mediaType: 'application/vnd.google-earth.kml+xml', extension: 'kml', write: zonesKml },
  { id: 'rows', mediaType: 'text/csv; charset=utf-8', extension: 'csv', write: zonesRowTable },
  { id: 'geotiff', mediaType: 'image/tiff', extension: 'tif', write: zonesGeoTiff },
  { id: 'layers', mediaType: 'image/tiff', extension: 'tif', withLayers: true, write: zonesLayersGeoTiff },
];
