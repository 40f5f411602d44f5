import { closeRing, windForGeoJson } from '../../shared/geo/rings.ts';
import type { RingLonLat } from '../../shared/geo/coordinates.ts';
import type { ExportedZone, ZoneExport } from './zoneExport.ts';

const plainColour = '#808080';

/** Zones as KML 2.2 (OGC 07-147r2), one placemark a zone. */
export function zonesKml(input: ZoneExport): Buffer {
  const title = `${input.blockName}: ${input.zoningName || `zoning ${input.zoningNumber}`}`;
  return Buffer.from(
    ['<?xml version="1.0" encoding="UTF-8"?>', '<kml xmlns="http://www.opengis.net/kml/2.2">', `<Document><name>${escaped(title)}</name>`, ...input.zones.map((zone) => placemark(zone)), '</Document>', '</kml>', ''].join('\n'),
    'utf8',
  );
}

function placemark(zone: ExportedZone): string {
  const facts = { zone: zone.number, name: zone.name, area_ha: (zone.areaM2 / 10_000).toFixed(4), vines: zone.vines, missing: zone.missing };
  const data = Object.entries(facts).map(([key, value]) => `<Data name="${key}"><value>${escaped(String(value))}</value></Data>`);
  const polygons = zone.polygonsLonLat.map((polygon) => {
    const [outer, ...holes] = windForGeoJson(polygon.map(closeRing));
    return `<Polygon><outerBoundaryIs>${ringText(outer!)}</outerBoundaryIs>${holes.map((hole) => `<innerBoundaryIs>${ringText(hole)}</innerBoundaryIs>`).join('')}</Polygon>`;
  });
  const colour = zone.colour ?? plainColour;
  const style = `<Style><LineStyle><color>${kmlColour(colour, 'ff')}</color><width>2</width></LineStyle><PolyStyle><color>${kmlColour(colour, '66')}</color></PolyStyle></Style>`;
  return `<Placemark><name>${escaped(zone.name || String(zone.number))}</name>${style}<ExtendedData>${data.join('')}</ExtendedData><MultiGeometry>${polygons.join('')}</MultiGeometry></Placemark>`;
}

function ringText(ring: RingLonLat): string {
  return `<LinearRing><coordinates>${ring.map(([lon, lat]) => `${lon.toFixed(8)},${lat.toFixed(8)}`).join(' ')}</coordinates></LinearRing>`;
}

/** KML writes colours as opacity, blue, green, red. */
function kmlColour(hex: string, opacity: string): string {
  return `${opacity}${hex.slice(5, 7)}${hex.slice(3, 5)}${hex.slice(1, 3)}`.toLowerCase();
}

/** Text for XML 1.0; characters that it cannot hold at all are left out. */
function escaped(text: string): string {
  // eslint-disable-next-line no-control-regex
  const allowed = text.replace(/[\u0000-\u0008\u000B\u000C\u000E-\u001F\uFFFE\uFFFF]/g, '');
  return allowed.replace(/&/g, '&amp;').replace(/</g, '&lt;').replace(/>/g, '&gt;').replace(/"/g, '&quot;');
}
