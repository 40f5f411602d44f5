import { ImportProblem } from '../importProblem.ts';
import { referenceFromEpsg } from '../reference/referenceSystem.ts';
import type { Sniffed } from '../sniffFormat.ts';
import type { LayersRead } from './rawLayer.ts';
import { readGeoJson } from './readGeoJson.ts';

/** GeoJSON, KML or GPX by what the contents were told to be. Throws ImportProblem for anything else. */
export async function readText({ format, foreignName }: Sniffed, text: () => string, layerName: string): Promise<LayersRead> {
  if (format === 'geojson') return readGeoJson(text(), layerName);
  const wgs84 = { reference: referenceFromEpsg(4326, 'format'), whyNoReference: null };
  if (format === 'kml') return { ...(await import('./readKml.ts')).readKml(text(), layerName), ...wgs84 };
  if (format === 'gpx') return { ...(await import('./readGpx.ts')).readGpx(text(), layerName), ...wgs84 };
  if (format === 'shapefile-part') throw new ImportProblem({ code: 'missing-part', fact: 'It is one part of a shapefile; a shapefile has at least .shp, .shx and .dbf.', remedy: 'Send all parts with the same name together, or packed into one ZIP.' });
  if (format === 'empty') throw new ImportProblem({ code: 'empty', fact: 'The file is empty.', remedy: 'Export or copy it again.' });
  const found = foreignName ?? (format === 'geotiff' ? 'a raster picture (TIFF)' : format === 'table' ? 'a table of points' : 'XML of another kind');
  throw new ImportProblem({ code: 'wrong-type', fact: `It is ${found}, not a file of outlines.`, remedy: 'Send a zipped shapefile, GeoPackage, GeoJSON, KML, KMZ or GPX.', params: { found } });
}
