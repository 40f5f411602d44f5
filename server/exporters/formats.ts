import { geoJsonOf } from './features/geoJson.ts';
import { geoPackageOf } from './features/geoPackage.ts';
import { shapefileOf } from './features/shapefile.ts';
import type { ZoneExport } from './zoneExport.ts';
import { rowFeatures, vineFeatures, zoneFeatures } from './zoneFeatures.ts';
import { zonesGeoJson } from './zonesGeoJson.ts';
import { zonesGeoTiff } from './zonesGeoTiff.ts';
import { rowsKml, zonesKml } from './zonesKml.ts';
import { zonesLayersGeoTiff } from './zonesLayersGeoTiff.ts';
import { zonesMembershipGeoTiff } from './zonesMembershipGeoTiff.ts';
import { zonesRowTable } from './zonesRowTable.ts';
import { zonesVineTable } from './zonesVineTable.ts';

export interface ExportFormat {
  id: string;
  mediaType: string;
  extension: string;
  /** Wants the cells of the layers too. */
  withLayers?: boolean;
  /** Wants the memberships too. */
  withMemberships?: boolean;
  /** Wants every vine with its membership too. */
  withVines?: boolean;
  /** What it holds in place of the zones, for the file's name. */
  about?: 'rows' | 'vines' | 'layers' | 'membership';
  write: (input: ZoneExport) => Buffer | Promise<Buffer>;
}

/** One row a format that zones leave in; the route, the menu and the checks read this table. */
export const exportFormats: readonly ExportFormat[] = [
  { id: 'geojson', mediaType: 'application/geo+json', extension: 'geojson', write: zonesGeoJson },
  { id: 'shapefile', mediaType: 'application/zip', extension: 'zip', write: (input) => shapefileOf(zoneFeatures(input), input.language) },
  { id: 'geopackage', mediaType: 'application/geopackage+sqlite3', extension: 'gpkg', write: (input) => geoPackageOf([zoneFeatures(input), rowFeatures(input)]) },
  { id: 'kml', mediaType: 'application/vnd.google-earth.kml+xml', extension: 'kml', write: zonesKml },
  { id: 'rows', mediaType: 'text/csv; charset=utf-8', extension: 'csv', about: 'rows', write: zonesRowTable },
  { id: 'rowsGeojson', mediaType: 'application/geo+json', extension: 'geojson', about: 'rows', write: (input) => geoJsonOf(rowFeatures(input)) },
  { id: 'rowsShapefile', mediaType: 'application/zip', extension: 'zip', about: 'rows', write: (input) => shapefileOf(rowFeatures(input), input.language) },
  { id: 'rowsKml', mediaType: 'application/vnd.google-earth.kml+xml', extension: 'kml', about: 'rows', write: rowsKml },
  { id: 'vines', mediaType: 'text/csv; charset=utf-8', extension: 'csv', withMemberships: true, withVines: true, about: 'vines', write: zonesVineTable },
  { id: 'vinesGeojson', mediaType: 'application/geo+json', extension: 'geojson', withMemberships: true, withVines: true, about: 'vines', write: (input) => geoJsonOf(vineFeatures(input)) },
  { id: 'geotiff', mediaType: 'image/tiff', extension: 'tif', write: zonesGeoTiff },
  { id: 'layers', mediaType: 'image/tiff', extension: 'tif', withLayers: true, about: 'layers', write: zonesLayersGeoTiff },
  { id: 'membership', mediaType: 'image/tiff', extension: 'tif', withMemberships: true, about: 'membership', write: zonesMembershipGeoTiff },
];
