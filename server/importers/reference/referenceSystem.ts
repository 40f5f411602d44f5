import proj4 from 'proj4';
import { crsDefinition } from '../../../shared/geo/crsDefinitions.ts';
import { datumShiftAccuracyM } from '../../../shared/geo/datumAccuracy.ts';
import type { LonLat } from '../../../shared/geo/coordinates.ts';
import { utmDefinition } from '../../../shared/geo/utm.ts';
import type { Reprojection } from '../../../shared/analysis/resampleFrame.ts';
import { ImportProblem } from '../importProblem.ts';
import type { ImportWarning, ReferenceSystem } from '../understood.ts';
import { readWkt } from './wktDefinition.ts';

/** Codes of Web Mercator from before it had its own. */
const webMercator: ReadonlySet<number> = new Set([3785, 102100, 102113, 900913]);

/** The shipped system of an EPSG code, or null. */
export function referenceFromEpsg(code: number, from: ReferenceSystem['from']): ReferenceSystem | null {
  const epsg = webMercator.has(code) ? 3857 : code;
  const shipped = crsDefinition(epsg);
  return shipped === null ? null : { epsg, name: shipped.name, definition: shipped.proj4, unitM: shipped.unitM, from };
}

/** A system from the text of a .prj file, WKT, `EPSG:code` or proj4 text. The reason is a clause that follows "because". */
export function referenceFromText(text: string, from: ReferenceSystem['from']): ReferenceSystem | { reason: string; name: string } {
  const plain = text.replace(/^\uFEFF/, '').trim();
  const code = /^(?:urn:ogc:def:crs:)?EPSG:{1,2}(\d{3,6})$/i.exec(plain);
  if (code !== null) return referenceFromEpsg(Number(code[1]), from) ?? { name: plain, reason: `EPSG:${code[1]} is not one of the systems that ship with the program` };
  if (plain.startsWith('+proj=')) return checked({ epsg: null, name: plain.slice(0, 60), definition: plain, unitM: unitOf(plain), from });
  const reading = readWkt(plain);
  if (reading.kind === 'unknown') return reading;
  if (reading.kind === 'definition') return checked({ epsg: null, name: reading.name, definition: reading.definition, unitM: unitOf(reading.definition), from });
  const shipped = referenceFromEpsg(reading.epsg, from);
  if (shipped !== null) return shipped;
  if (reading.definition === null) return { name: reading.name, reason: `EPSG:${reading.epsg} is not one of the systems that ship with the program` };
  return checked({ epsg: reading.epsg, name: reading.name, definition: reading.definition, unitM: unitOf(reading.definition), from });
}

/** Metres in one unit of a proj4 text; null for degrees. */
export function unitOf(definition: string): number | null {
  if (definition.includes('+proj=longlat')) return null;
  const factor = /\+to_meter=([0-9.eE+-]+)/.exec(definition)?.[1];
  if (factor !== undefined) return Number(factor);
  if (definition.includes('+units=us-ft')) return 1200 / 3937;
  return definition.includes('+units=ft') ? 0.3048 : 1;
}

/** Position in degrees of a position in the system; null where the system has no such place. */
export function toLonLat(reference: ReferenceSystem): (xy: readonly [number, number]) => LonLat | null {
  const turned = reference.definition.includes('+axis=');
  const isPlain = reference.unitM === null && !/\+(towgs84|pm)=/.test(reference.definition);
  const converter = proj4(reference.definition);
  return ([x, y]) => {
    if (!Number.isFinite(x) || !Number.isFinite(y)) return null;
    // Beyond a turn of the globe the arithmetic would wrap around and give a place all the same.
    if (reference.unitM === null && (Math.abs(x) > 360 || Math.abs(y) > 90.000001)) return null;
    // Degrees that need no conversion keep every digit; some world-wide files count to 360.
    if (isPlain) return [x > 180 ? x - 360 : x, y];
    try {
      const [lon, lat] = converter.inverse([x, y], turned);
      return Number.isFinite(lon) && Number.isFinite(lat) && Math.abs(lat) <= 90.000001 ? [lon, lat] : null;
    } catch {
      return null;
    }
  };
}

/** From the system to the metres of a grid's UTM zone and back; undefined when both have the same numbers. */
export function reprojectionTo(reference: ReferenceSystem, gridEpsg: number, near: readonly [number, number]): Reprojection | undefined {
  const turned = reference.definition.includes('+axis=');
  const converter = proj4(reference.definition, utmDefinition(gridEpsg));
  const toGrid: Reprojection = {
    forward: ([x, y]) => converter.forward([x, y], turned),
    inverse: ([x, y]) => converter.inverse([x, y], turned),
  };
  const isSame = [0, 1, 2, 3].every((corner) => {
    const [x, y] = [near[0] + (corner % 2) * 2000, near[1] + Math.floor(corner / 2) * 2000];
    const [gridX, gridY] = toGrid.forward([x, y]);
    return Math.abs(gridX - x) < 1e-3 && Math.abs(gridY - y) < 1e-3;
  });
  return isSame ? undefined : toGrid;
}

/** Metres by which positions may lie aside after our conversion; null where the file brings parameters of its own. */
export function datumUncertaintyM({ epsg, definition }: Pick<ReferenceSystem, 'epsg' | 'definition'>): number | null {
  const shipped = epsg === null ? null : crsDefinition(epsg);
  return shipped === null ? datumShiftAccuracyM(definition) : shipped.datumUncertaintyM;
}

/** What to say about the accuracy of a system's datum; null when there is nothing to say. */
export function datumWarning(reference: ReferenceSystem): ImportWarning | null {
  const uncertaintyM = datumUncertaintyM(reference);
  const { name } = reference;
  if (uncertaintyM === null)
    return {
      code: 'datum-own',
      text: `${name} is converted to today's satellite positions by numbers that the file itself brings; how well they fit is not known here. Compare the layer with the block outline on the map.`,
      params: { name },
    };
  if (uncertaintyM < 2) return null;
  return { code: 'datum', text: `${name} is converted to today's satellite positions; the layer may lie up to ${uncertaintyM} m aside. Compare it with the block outline on the map.`, params: { name, uncertaintyM } };
}

/** The system that a person answered with. Throws `unknown-reference`. */
export function referenceFromAnswer(epsg: number): ReferenceSystem {
  const reference = referenceFromEpsg(epsg, 'answer');
  if (reference !== null) return reference;
  throw new ImportProblem({ code: 'unknown-reference', fact: `EPSG:${epsg} is not one of the reference systems that ship with the program.`, remedy: 'Choose another, or export the file in WGS 84 / UTM.', params: { epsg } });
}

function checked(reference: ReferenceSystem): ReferenceSystem | { reason: string; name: string } {
  try {
    proj4(reference.definition);
    return reference;
  } catch {
    return { name: reference.name, reason: 'its parameters cannot be used' };
  }
}
