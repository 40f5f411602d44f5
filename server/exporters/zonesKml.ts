import { kmlOf } from './features/kml.ts';
import type { ZoneExport } from './zoneExport.ts';
import { rowFeatures, zoneFeatures } from './zoneFeatures.ts';

const plainColour = '#808080';

/** Zones as KML, one placemark a zone. */
export function zonesKml(input: ZoneExport): Buffer {
  const coloured = new Map(input.zones.map(({ number, name, colour }) => [number, { label: name || String(number), colour: colour ?? plainColour }]));
  return kmlOf(zoneFeatures(input), ({ values: [zone] }) => coloured.get(zone as number)!);
}

/** The rows as KML, one placemark a stretch of one zone, in the zone's colour. */
export function rowsKml(input: ZoneExport): Buffer {
  const colours = new Map(input.zones.map(({ number, colour }) => [number, colour]));
  return kmlOf(rowFeatures(input), ({ values: [row, from, to, zone, name] }) => ({ label: `${row}: ${from}–${to}, ${zone}${name ? ` ${name}` : ''}`, colour: colours.get(zone as number) ?? null }));
}
