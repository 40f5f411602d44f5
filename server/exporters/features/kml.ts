import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { closeRing, windForGeoJson } from '../../../shared/geo/rings.ts';
import type { ExportedFeature, FeatureLayer, FeatureShape } from './featureLayer.ts';
import { xmlText } from './xmlText.ts';

/** How one placemark looks and is called. */
export interface KmlLook {
  readonly label: string;
  /** #rrggbb; null leaves the viewer's own. */
  readonly colour: string | null;
}

/** A layer as KML 2.2 (OGC 07-147r2), one placemark a feature with its fields as data. */
export function kmlOf(layer: FeatureLayer, lookOf: (feature: ExportedFeature, at: number) => KmlLook): Buffer {
  const placemarks = layer.features.map((feature, at) => placemark(layer, feature, lookOf(feature, at)));
  return Buffer.from(['<?xml version="1.0" encoding="UTF-8"?>', '<kml xmlns="http://www.opengis.net/kml/2.2">', `<Document><name>${xmlText(layer.title)}</name>`, ...placemarks, '</Document>', '</kml>', ''].join('\n'), 'utf8');
}

function placemark({ fields }: FeatureLayer, { values, shape }: ExportedFeature, { label, colour }: KmlLook): string {
  const data = fields.map(({ name, decimals }, at) => {
    const value = values[at] ?? '';
    return `<Data name="${name}"><value>${xmlText(typeof value === 'number' && decimals !== undefined ? value.toFixed(decimals) : String(value))}</value></Data>`;
  });
  const style = colour === null ? '' : `<Style><LineStyle><color>${kmlColour(colour, 'ff')}</color><width>2</width></LineStyle><PolyStyle><color>${kmlColour(colour, '66')}</color></PolyStyle></Style>`;
  return `<Placemark><name>${xmlText(label)}</name>${style}<ExtendedData>${data.join('')}</ExtendedData>${shapeText(shape)}</Placemark>`;
}

function shapeText(shape: FeatureShape): string {
  if (shape.kind === 'point') return `<Point>${coordinates([shape.at])}</Point>`;
  if (shape.kind === 'lines') return `<MultiGeometry>${shape.linesLonLat.map((line) => `<LineString>${coordinates(line)}</LineString>`).join('')}</MultiGeometry>`;
  const polygons = shape.polygonsLonLat.map((polygon) => {
    const [outer, ...holes] = windForGeoJson(polygon.map(closeRing));
    return `<Polygon><outerBoundaryIs>${ring(outer!)}</outerBoundaryIs>${holes.map((hole) => `<innerBoundaryIs>${ring(hole)}</innerBoundaryIs>`).join('')}</Polygon>`;
  });
  return `<MultiGeometry>${polygons.join('')}</MultiGeometry>`;
}

function ring(points: readonly LonLat[]): string {
  return `<LinearRing>${coordinates(points)}</LinearRing>`;
}

function coordinates(points: readonly LonLat[]): string {
  return `<coordinates>${points.map(([lon, lat]) => `${lon.toFixed(8)},${lat.toFixed(8)}`).join(' ')}</coordinates>`;
}

/** KML writes colours as opacity, blue, green, red. */
function kmlColour(hex: string, opacity: string): string {
  return `${opacity}${hex.slice(5, 7)}${hex.slice(3, 5)}${hex.slice(1, 3)}`.toLowerCase();
}
