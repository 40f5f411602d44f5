import { zoneSpan, zoneStyle } from '../../shared/catalog/zoneStyles.ts';
import { kmlOf } from './features/kml.ts';
import type { ZoneExport } from './zoneExport.ts';
import { rowFeatures, zoneFeatures } from './zoneFeatures.ts';

/** Zones as KML, one placemark a zone, in the colours of the screen. */
export function zonesKml(input: ZoneExport): Buffer {
  const colours = coloursOf(input);
  const looks = new Map(input.zones.map(({ number, name }) => [number, { label: name || String(number), colour: colours.get(number)! }]));
  return kmlOf(zoneFeatures(input), ({ values: [zone] }) => looks.get(zone as number)!);
}

/** The rows as KML, one placemark a stretch of one zone, in the zone's colour. */
export function rowsKml(input: ZoneExport): Buffer {
  const colours = coloursOf(input);
  return kmlOf(rowFeatures(input), ({ values: [row, from, to, zone, name] }) => ({ label: `${row}: ${from}–${to}, ${zone}${name ? ` ${name}` : ''}`, colour: colours.get(zone as number) ?? null }));
}

/** The colour people gave a zone, else the one its number has on the map. */
function coloursOf({ zones }: ZoneExport): Map<number, string> {
  const count = zoneSpan(zones);
  return new Map(zones.map(({ number, colour }) => [number, zoneStyle(number, { count, own: colour === null ? {} : { [number]: colour } }).fill]));
}
