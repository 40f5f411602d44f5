import { isModernEllipsoid } from '../reference/datums.ts';
import { referenceFromEpsg, referenceFromText } from '../reference/referenceSystem.ts';
import type { ReferenceSystem } from '../understood.ts';

/** A system, nothing said, or something said that cannot be used. `saidUnitM`: the keys give another unit of length than the system has by its code. */
export type KeyReading = { kind: 'known'; reference: ReferenceSystem; assumedDatum: boolean; saidUnitM?: number } | { kind: 'none' } | { kind: 'unusable'; name: string; reason: string };

type Keys = Readonly<Record<string, unknown>>;

const USER_DEFINED = 32767;

/** Reference system from the keys of GeoTIFF 1.1 (OGC 19-008r4): by code, or by parameters for a system without one. */
export function referenceFromGeoKeys(keys: Keys | null): KeyReading {
  if (keys === null) return { kind: 'none' };
  const projected = code(keys, 'ProjectedCSTypeGeoKey');
  const geographic = code(keys, 'GeographicTypeGeoKey');
  const model = code(keys, 'GTModelTypeGeoKey');
  const name = citation(keys);
  if (model === 3) return { kind: 'unusable', name, reason: 'its coordinates are counted from the centre of the Earth' };
  if (projected !== null) return inSaidUnit(byCode(projected, name), keys);
  if (model !== 1 && geographic !== null) return byCode(geographic, name);
  const written = peString(keys);
  if (written !== null) return { kind: 'known', reference: written, assumedDatum: false };
  const definition = model === 1 ? projectedDefinition(keys, geographic) : model === 2 ? geographicDefinition(keys, null) : null;
  if (definition === null) return model === null ? { kind: 'none' } : { kind: 'unusable', name, reason: 'its own reference system is not described completely' };
  if ('reason' in definition) return { kind: 'unusable', name, reason: definition.reason };
  const reference = referenceFromText(definition.text, 'file');
  if ('reason' in reference) return { kind: 'unusable', name, reason: reference.reason };
  return { kind: 'known', reference: { ...reference, name }, assumedDatum: definition.assumedDatum };
}

function byCode(epsg: number, name: string): KeyReading {
  const reference = referenceFromEpsg(epsg, 'file');
  if (reference !== null) return { kind: 'known', reference, assumedDatum: false };
  return { kind: 'unusable', name, reason: `EPSG:${epsg} is not one of the systems that ship with the program` };
}

/** Coordinates may be counted in another unit than the code's own, such as state plane metres written in feet; the reference reader follows the unit too. */
function inSaidUnit(reading: KeyReading, keys: Keys): KeyReading {
  const said = code(keys, 'ProjLinearUnitsGeoKey') === null ? null : linearUnit(keys);
  if (reading.kind !== 'known' || said === null || reading.reference.unitM === null || Math.abs(said / reading.reference.unitM - 1) < 1e-7) return reading;
  const definition = reading.reference.definition.replace(/ \+units=\S+| \+to_meter=\S+/g, '').replace(' +no_defs', ` +to_meter=${said} +no_defs`);
  return { ...reading, reference: { ...reading.reference, epsg: null, definition, unitM: said }, saidUnitM: said };
}

/** Some programs write the whole system as text into a citation. */
function peString(keys: Keys): ReferenceSystem | null {
  for (const key of ['PCSCitationGeoKey', 'GTCitationGeoKey', 'GeogCitationGeoKey']) {
    const text = keys[key];
    const wkt = typeof text === 'string' ? /ESRI PE String = ((?:PROJCS|GEOGCS)\[.*\])/s.exec(text)?.[1] : undefined;
    const reference = wkt === undefined ? null : referenceFromText(wkt, 'file');
    if (reference !== null && !('reason' in reference)) return reference;
  }
  return null;
}

/** The first citation that says more than a unit or nothing. */
function citation(keys: Keys): string {
  for (const key of ['PCSCitationGeoKey', 'GTCitationGeoKey', 'GeogCitationGeoKey']) {
    const text = keys[key];
    if (typeof text === 'string' && text.replace(/[|\s]/g, '') !== '') return text.split('|')[0]!.replace(/^PCS Name = /, '').slice(0, 120);
  }
  return 'a system of its own';
}

function code(keys: Keys, key: string): number | null {
  const value = keys[key];
  return typeof value === 'number' && value > 0 && value !== USER_DEFINED ? value : null;
}

function number(keys: Keys, key: string): number | null {
  const value = keys[key];
  return typeof value === 'number' && Number.isFinite(value) ? value : null;
}

type Definition = { text: string; assumedDatum: boolean } | { reason: string } | null;

/** Codes of common ellipsoids (EPSG): semi-major axis in metres and inverse flattening. */
const ellipsoids: Readonly<Record<number, readonly [number, number]>> = {
  7030: [6378137, 298.257223563], 7019: [6378137, 298.257222101], 7022: [6378388, 297], 7004: [6377397.155, 299.1528128],
  7001: [6377563.396, 299.3249646], 7002: [6377340.189, 299.3249646], 7011: [6378249.2, 293.4660212936265], 7012: [6378249.145, 293.465],
  7013: [6378249.145, 293.4663077], 7024: [6378245, 298.3], 7050: [6378160, 298.25], 7003: [6378160, 298.25], 7036: [6378160, 298.247167427],
};

/** Datum part of a definition: from the code of a geographic system, or from ellipsoid and shift in the keys. */
function datumPart(keys: Keys, geographic: number | null): { text: string; assumedDatum: boolean } | { reason: string } {
  const known = geographic === null ? null : referenceFromEpsg(geographic, 'file');
  if (known !== null) return { text: known.definition.replace('+proj=longlat ', '').replace(' +no_defs', ''), assumedDatum: false };
  if (geographic !== null) return { reason: `EPSG:${geographic} is not one of the systems that ship with the program` };
  const meridian = primeMeridian(keys);
  if (meridian === null) return { reason: 'its prime meridian is not known' };
  const angles = code(keys, 'GeogAngularUnitsGeoKey');
  if (angles !== null && angles !== 9102 && angles !== 9122) return { reason: 'its angles are not counted in degrees' };
  const listed = ellipsoids[code(keys, 'GeogEllipsoidGeoKey') ?? 0];
  const a = number(keys, 'GeogSemiMajorAxisGeoKey') ?? listed?.[0] ?? null;
  const minor = number(keys, 'GeogSemiMinorAxisGeoKey');
  const inverseFlattening = number(keys, 'GeogInvFlatteningGeoKey') ?? (a !== null && minor !== null && minor < a ? a / (a - minor) : (listed?.[1] ?? null));
  if (a === null || inverseFlattening === null || !(a > 6.3e6 && a < 6.4e6)) return { reason: 'it does not say which ellipsoid it uses' };
  const shift = keys['GeogTOWGS84GeoKey'];
  const list = shift === undefined ? null : Array.from(shift as ArrayLike<number>);
  if (list !== null && list.length >= 3) return { text: `+a=${a} +rf=${inverseFlattening} +towgs84=${list.join(',')}${meridian}`, assumedDatum: false };
  if (isModernEllipsoid(a, inverseFlattening)) return { text: `+a=${a} +rf=${inverseFlattening}${meridian}`, assumedDatum: true };
  return { reason: 'its datum is not described' };
}

/** Greenwich longitudes of prime meridians by their EPSG code, degrees. */
const meridians: Readonly<Record<number, number>> = { 8901: 0, 8902: -9.13190611, 8903: 2.33722917, 8904: -74.08091667, 8905: -3.68793889, 8906: 12.45233333, 8907: 7.43958333, 8908: 106.80771944, 8909: -17.66666667, 8910: 4.36797500, 8911: 18.05827778, 8912: 23.71633750, 8913: 10.72291667 };

/** Text for proj4; empty for Greenwich or where nothing is said, null for one that is not known. */
function primeMeridian(keys: Keys): string | null {
  const listed = code(keys, 'GeogPrimeMeridianGeoKey');
  const degrees = listed === null ? (number(keys, 'GeogPrimeMeridianLongGeoKey') ?? 0) : meridians[listed];
  if (degrees === undefined) return null;
  return degrees === 0 ? '' : ` +pm=${degrees}`;
}

function geographicDefinition(keys: Keys, geographic: number | null): Definition {
  const datum = datumPart(keys, geographic);
  return 'reason' in datum ? datum : { text: `+proj=longlat ${datum.text} +no_defs`, assumedDatum: datum.assumedDatum };
}

/** Coordinate transformation codes of the standard; those of conic and oblique kinds name their origin differently. */
const methods: Readonly<Record<number, { proj: string; origin: 'nat' | 'false' | 'center' }>> = {
  1: { proj: 'tmerc', origin: 'nat' }, 7: { proj: 'merc', origin: 'nat' }, 8: { proj: 'lcc', origin: 'false' }, 9: { proj: 'lcc', origin: 'nat' },
  10: { proj: 'laea', origin: 'center' }, 11: { proj: 'aea', origin: 'nat' }, 14: { proj: 'stere', origin: 'nat' }, 15: { proj: 'stere', origin: 'nat' },
  16: { proj: 'sterea', origin: 'nat' }, 17: { proj: 'eqc', origin: 'nat' }, 18: { proj: 'cass', origin: 'nat' }, 22: { proj: 'poly', origin: 'nat' }, 26: { proj: 'nzmg', origin: 'nat' },
};

/** Mercator and equidistant cylindrical: their standard parallel is where the scale is true, not the origin. */
const byParallel: ReadonlySet<number> = new Set([7, 17]);
const POLAR_STEREOGRAPHIC = 15;

function projectedDefinition(keys: Keys, geographic: number | null): Definition {
  const datum = datumPart(keys, geographic);
  if ('reason' in datum) return datum;
  const unit = linearUnit(keys);
  if (unit === null) return { reason: 'its unit of length is not known' };
  const utm = utmPart(code(keys, 'ProjectionGeoKey'));
  if (utm !== null) return { text: `${utm} ${datum.text} +to_meter=${unit} +no_defs`, assumedDatum: datum.assumedDatum };
  const methodCode = code(keys, 'ProjCoordTransGeoKey');
  const method = methods[methodCode ?? 0];
  if (method === undefined) return { reason: methodCode === null ? 'its projection is not described' : `its projection has the unknown number ${methodCode}` };
  const pick = (...names: string[]): number | null => names.map((key) => number(keys, key)).find((value) => value !== null) ?? null;
  const part = (name: string, value: number | null): string => (value === null ? '' : ` +${name}=${value}`);
  const parallel = pick('ProjStdParallel1GeoKey');
  const isPolar = methodCode === POLAR_STEREOGRAPHIC;
  const trueScale = isPolar ? pick('ProjNatOriginLatGeoKey') : byParallel.has(methodCode!) ? parallel : null;
  const text =
    (isPolar ? part('lat_0', (trueScale ?? 90) < 0 ? -90 : 90) : part('lat_0', byParallel.has(methodCode!) && parallel !== null ? null : pick('ProjNatOriginLatGeoKey', 'ProjFalseOriginLatGeoKey', 'ProjCenterLatGeoKey'))) +
    part('lon_0', pick('ProjStraightVertPoleLongGeoKey', 'ProjNatOriginLongGeoKey', 'ProjFalseOriginLongGeoKey', 'ProjCenterLongGeoKey')) +
    part('lat_ts', trueScale !== null && Math.abs(trueScale) < 90 ? trueScale : null) +
    part('lat_1', trueScale === null ? parallel : null) +
    part('lat_2', pick('ProjStdParallel2GeoKey')) +
    part('k', pick('ProjScaleAtNatOriginGeoKey', 'ProjScaleAtCenterGeoKey')) +
    part('x_0', metres(pick('ProjFalseEastingGeoKey', 'ProjFalseOriginEastingGeoKey', 'ProjCenterEastingGeoKey'), unit)) +
    part('y_0', metres(pick('ProjFalseNorthingGeoKey', 'ProjFalseOriginNorthingGeoKey', 'ProjCenterNorthingGeoKey'), unit));
  const oneParallel = method.proj === 'lcc' && method.origin === 'nat' ? part('lat_1', pick('ProjNatOriginLatGeoKey')) : '';
  return { text: `+proj=${method.proj}${text}${oneParallel} ${datum.text} +to_meter=${unit} +no_defs`, assumedDatum: datum.assumedDatum };
}

function metres(value: number | null, unit: number): number | null {
  return value === null ? null : value * unit;
}

/** Metres in a unit of length by its EPSG code. */
const lengths: Readonly<Record<number, number>> = { 9001: 1, 9002: 0.3048, 9003: 1200 / 3937, 9005: 0.3047972654, 9036: 1000, 9037: 0.9143917962, 9040: 0.914398414616029, 9041: 0.304799471538676, 9084: 0.914398530744441, 9094: 0.304799710181509, 9096: 0.9144, 9097: 20.1168 };

/** Metres in the file's unit of length; null when it is one we do not know. */
function linearUnit(keys: Keys): number | null {
  const unit = code(keys, 'ProjLinearUnitsGeoKey');
  if (unit === null) return number(keys, 'ProjLinearUnitSizeGeoKey') ?? 1;
  return lengths[unit] ?? null;
}

/** 160zz is UTM zone zz north, 161zz south. */
function utmPart(projection: number | null): string | null {
  if (projection === null) return null;
  const zone = projection % 100;
  const isUtm = (projection > 16000 && projection <= 16060) || (projection > 16100 && projection <= 16160);
  return isUtm ? `+proj=utm +zone=${zone}${projection > 16100 ? ' +south' : ''}` : null;
}
