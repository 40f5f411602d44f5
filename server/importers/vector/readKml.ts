import { kml } from '@tmcw/togeojson';
import type { Geometry } from 'geojson';
import { ImportProblem } from '../importProblem.ts';
import type { ImportWarning } from '../understood.ts';
import { parseXml } from './parseXml.ts';
import type { RawFeature, RawLayer } from './rawLayer.ts';

/** Attributes that only say how a map draws the shape. */
const drawing = /^(stroke|fill|icon|label|styleUrl|styleHash|styleMapHash|visibility|@geometry-type|timespan|timestamp|bbox)/;

/** Placemarks of a KML file (OGC 12-007r2): always WGS 84. Throws ImportProblem. */
export function readKml(text: string, layerName: string): { layers: RawLayer[]; warnings: ImportWarning[] } {
  const document = parseXml(text, 'kml');
  // Found once, since the list changes as its elements go.
  const [links, pictures] = ['NetworkLink', 'GroundOverlay'].map((name) => [...document.getElementsByTagName(name)]) as [Element[], Element[]];
  // Their frames are no shapes of anybody's.
  for (const element of [...links, ...pictures]) element.parentNode?.removeChild(element);
  // Some programs set spaces after the commas, which would end a position there.
  for (const { firstChild } of document.getElementsByTagName('coordinates')) if (firstChild?.nodeValue) firstChild.nodeValue = firstChild.nodeValue.replace(/\s*,\s*/g, ',');
  const collection = kml(document as never) as { features: { geometry: Geometry | null; properties: Record<string, unknown> | null }[] };
  const features = collection.features.flatMap(({ geometry, properties }): RawFeature[] => {
    const kept = Object.fromEntries(Object.entries(properties ?? {}).filter(([name, value]) => !drawing.test(name) && (typeof value !== 'object' || value === null)));
    return flat(geometry).map((each) => ({ geometry: each, properties: kept }));
  });
  const warnings: ImportWarning[] = [];
  if (links.length > 0) warnings.push({ code: 'network-link', text: 'Part of its contents lies on another computer and is not read.' });
  if (pictures.length > 0) warnings.push({ code: 'ground-overlay', text: 'It holds a picture laid over the ground, which is not read; export such layers as GeoTIFF.' });
  if (features.length === 0) {
    const fact = links.length > 0 ? 'It holds no shapes of its own, only a link to another computer.' : pictures.length > 0 ? 'It holds no shapes, only a picture laid over the ground.' : 'It holds no placemarks with shapes.';
    throw new ImportProblem({ code: 'no-layer', fact, remedy: 'Draw or choose the outlines and export them again.' });
  }
  return { layers: [{ name: layerName, features }], warnings };
}

/** Folders, links and remarks come out without a geometry and are not shapes. */
function flat(geometry: Geometry | null): Geometry[] {
  if (geometry === null) return [];
  return geometry.type === 'GeometryCollection' ? geometry.geometries.flatMap(flat) : [geometry];
}
