/**
 * Reference systems that ship with the program, by EPSG code: UTM on the datums in use, latitude and longitude,
 * national grids, US state plane, Web Mercator. Pure data and text; the arithmetic is proj4's.
 */
import { americanGrids } from './crsAmericas.ts';
import { europeanGrids } from './crsEurope.ts';
import { geographicRows, utmCodes, utmRow } from './crsFamilies.ts';
import { otherGrids } from './crsRestOfWorld.ts';
import type { GridRow } from './crsRow.ts';
import { statePlaneZones } from './crsStatePlane.ts';
import type { LonLat } from './coordinates.ts';
import { datumShiftAccuracyM } from './datumAccuracy.ts';
import { utmZone } from './utm.ts';

export interface CrsDefinition {
  readonly epsg: number;
  readonly name: string;
  /** Text that proj4 reads. */
  readonly proj4: string;
  /** Metres in one unit of the coordinates; null for degrees. */
  readonly unitM: number | null;
  /** How far a position on this datum may lie from the same numbers on WGS 84 after our conversion, metres, rounded up. */
  readonly datumUncertaintyM: number;
}

/** The foot of 1959 and the US survey foot of 1893 (exact by definition). */
const FOOT_M = 0.3048;
const SURVEY_FOOT_M = 1200 / 3937;

const NAD83 = '+datum=NAD83';

const grids: ReadonlyMap<number, GridRow> = new Map([...geographicRows, ...europeanGrids, ...americanGrids, ...otherGrids].map((row) => [row[0], row]));

const statePlane: ReadonlyMap<number, GridRow> = new Map(
  statePlaneZones.flatMap(([name, definition, metres, surveyFeet, feet]) => [
    ...metres.map((epsg): [number, GridRow] => [epsg, [epsg, `NAD83 / ${name}`, `${definition} ${NAD83}`]]),
    ...surveyFeet.map((epsg): [number, GridRow] => [epsg, [epsg, `NAD83 / ${name} (US survey feet)`, `${definition} ${NAD83} +units=us-ft`]]),
    ...feet.map((epsg): [number, GridRow] => [epsg, [epsg, `NAD83 / ${name} (feet)`, `${definition} ${NAD83} +units=ft`]]),
  ]),
);

/** The definition of an EPSG code, or null when it does not ship with the program. `crsDefinition(2154)` is Lambert-93. */
export function crsDefinition(epsg: number): CrsDefinition | null {
  const row = grids.get(epsg) ?? utmRow(epsg) ?? statePlane.get(epsg);
  if (row === undefined || row === null) return null;
  const [, name, text] = row;
  const unitM = text.startsWith('+proj=longlat') ? null : text.includes('+units=us-ft') ? SURVEY_FOOT_M : text.includes('+units=ft') ? FOOT_M : 1;
  const units = unitM === 1 && !text.includes('+units=') ? ' +units=m' : '';
  return { epsg, name, proj4: `${text}${units} +no_defs`, unitM, datumUncertaintyM: datumUncertaintyM(name, text) };
}

/**
 * NAD 83 and GDA94 are taken as WGS 84, from which their plates have moved by 1 to 2 m; other modern datums agree within a
 * metre (common knowledge of the trade). Old ones as their parameters fit; every shift among our definitions is in that list.
 */
function datumUncertaintyM(name: string, text: string): number {
  const shift = datumShiftAccuracyM(text);
  if (shift !== 0) return shift!;
  if (/NAD83|GDA94/.test(name)) return 2;
  return text.includes('WGS84') ? 0 : 1;
}

/**
 * Codes worth trying for a file without a reference system: UTM of the estate's zone and its neighbours, and every
 * national grid and state plane zone in metres or feet. Without a place of the estate: the grids only.
 */
export function candidateCodes(near: LonLat | null): number[] {
  const utm = near === null ? [] : [0, -1, 1].flatMap((step) => utmCodes(((utmZone(near) + step + 59) % 60) + 1, near[1] < 0));
  const opposite = near === null ? [] : utmCodes(utmZone(near), near[1] >= 0).slice(0, 1);
  return [4326, 3857, ...utm, ...opposite, ...[...europeanGrids, ...americanGrids, ...otherGrids].map((row) => row[0]), ...firstOfEachZone()];
}

/** The 1986 realisation in metres and in feet; the later ones lie within a metre of it. */
function firstOfEachZone(): number[] {
  return statePlaneZones.flatMap(([, , metres, surveyFeet, feet]) => [metres.at(-1), surveyFeet[0], feet[0]].filter((code) => code !== undefined));
}
