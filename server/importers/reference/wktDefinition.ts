import proj4 from 'proj4';
import { datumShift, isModernEllipsoid, needsCorrectionGrid } from './datums.ts';

/** What a WKT text (a .prj file) says. */
export type WktReading =
  | { kind: 'code'; epsg: number; name: string; definition: string | null }
  | { kind: 'definition'; name: string; definition: string; assumedDatum: boolean }
  | { kind: 'unknown'; name: string; reason: string };

/** Projection names of WKT in plain letters, and what proj4 calls them. */
const projections: Readonly<Record<string, string>> = {
  longlat: 'longlat', transversemercator: 'tmerc', gausskruger: 'tmerc', transversemercatorsouthorientated: 'tmerc',
  lambertconformalconic: 'lcc', lambertconformalconic1sp: 'lcc', lambertconformalconic2sp: 'lcc', lambertconicconformal1sp: 'lcc', lambertconicconformal2sp: 'lcc', lambertconformalconic2spbelgium: 'lcc',
  albers: 'aea', albersconicequalarea: 'aea', albersequalarea: 'aea', lambertazimuthalequalarea: 'laea', obliquestereographic: 'sterea', doublestereographic: 'sterea', stereographic: 'stere', polarstereographic: 'stere',
  mercator: 'merc', mercator1sp: 'merc', mercator2sp: 'merc', mercatorauxiliarysphere: 'merc', popularvisualisationpseudomercator: 'merc',
  krovak: 'krovak', hotineobliquemercator: 'omerc', hotineobliquemercatorazimuthcenter: 'omerc', hotineobliquemercatorvariantb: 'omerc', swissobliquecylindrical: 'somerc', swissobliquemercator: 'somerc',
  polyconic: 'poly', americanpolyconic: 'poly', newzealandmapgrid: 'nzmg', cassinisoldner: 'cass', cassini: 'cass', equirectangular: 'eqc', equidistantcylindrical: 'eqc', azimuthalequidistant: 'aeqd',
};

/** Projections made for one country: their parameters are part of the name, and dialects leave some out. */
const fixedParameters: Readonly<Record<string, string>> = {
  krovak: ' +lat_0=49.5 +lon_0=24.8333333333333 +alpha=30.2881397527778 +k=0.9999',
  nzmg: ' +lat_0=-41 +lon_0=173',
};

/** Reads WKT of either version, also in the dialect of .prj files. Never throws. */
export function readWkt(text: string): WktReading {
  const name = /^\s*[A-Z_]+\s*[[(]\s*"([^"]{0,120})/i.exec(text)?.[1] ?? 'unnamed';
  if (text.length > 20_000) return { kind: 'unknown', name, reason: 'the text is far longer than a reference system needs' };
  const parsed = parse(text);
  const outer = /(?:AUTHORITY\s*\[\s*"EPSG"\s*,\s*"?|ID\s*\[\s*"EPSG"\s*,\s*"?)(\d+)"?\s*\]\s*\]\s*$/i.exec(text);
  const own = parsed === null ? null : describe(parsed, text);
  if (outer !== null) return { kind: 'code', epsg: Number(outer[1]), name, definition: own !== null && 'definition' in own ? own.definition : null };
  const usual = codeOfUsualName(name);
  if (usual !== null && own !== null && 'definition' in own) return { kind: 'code', epsg: usual, name, definition: own.definition };
  if (own === null) return { kind: 'unknown', name, reason: 'it is not text that describes a reference system' };
  return 'definition' in own ? { kind: 'definition', name, ...own } : { kind: 'unknown', name, ...own };
}

/** .prj files name systems in their own dialect and leave the code out; the commonest names have one. */
function codeOfUsualName(name: string): number | null {
  if (name === 'GCS_WGS_1984') return 4326;
  const utm = /^(WGS_1984|ETRS_1989|NAD_1983|SIRGAS_2000)_UTM_Zone_(\d{1,2})([NS])$/.exec(name);
  const mga = /^(GDA_1994|GDA2020)_MGA_Zone_(\d{2})$/.exec(name);
  if (mga !== null) return (mga[1] === 'GDA2020' ? 7800 : 28300) + Number(mga[2]);
  if (utm === null) return null;
  const north = utm[3] === 'N';
  const base = { WGS_1984: north ? 32600 : 32700, ETRS_1989: 25800, NAD_1983: 26900, SIRGAS_2000: north ? 31954 : 31960 }[utm[1] as 'WGS_1984'];
  return base + Number(utm[2]);
}

interface ParsedWkt {
  projName?: string;
  datumCode?: string;
  datum_params?: readonly (string | number)[];
  a?: number;
  rf?: number;
  to_meter?: number;
  from_greenwich?: number;
  lat0?: number;
  lat1?: number;
  lat2?: number;
  lat_ts?: number;
  long0?: number;
  longc?: number;
  alpha?: number;
  rectified_grid_angle?: number;
  k0?: number;
  x0?: number;
  y0?: number;
  axis?: string;
}

function parse(text: string): ParsedWkt | null {
  try {
    proj4.defs('imported-text', text);
    return (proj4.defs('imported-text') as ParsedWkt | undefined) ?? null;
  } catch {
    return null;
  }
}

/** proj4 text from the parsed parameters: WKT itself loses the datum of most national systems on the way. */
function describe(wkt: ParsedWkt, text: string): { definition: string; assumedDatum: boolean } | { reason: string } {
  const projection = projections[(wkt.projName ?? '').toLowerCase().replace(/[^a-z0-9]/g, '')];
  if (projection === undefined) return { reason: `its projection "${wkt.projName ?? 'none'}" is not known` };
  const datum = datumText(wkt, text);
  if ('reason' in datum) return datum;
  if (projection === 'longlat') return { definition: `+proj=longlat ${datum.text}${primeMeridian(wkt, text)} +no_defs`, assumedDatum: datum.assumed };
  const angle = angularUnit(text);
  const degrees = (radians: number | undefined, key: string): string => (radians === undefined || !Number.isFinite(radians) ? '' : ` +${key}=${round(((radians * 180) / Math.PI) * angle)}`);
  const plain = (value: number | undefined, key: string): string => (value === undefined || !Number.isFinite(value) ? '' : ` +${key}=${round(value)}`);
  const isSwiss = projection === 'omerc' && Math.abs((wkt.alpha ?? wkt.rectified_grid_angle ?? 0) - Math.PI / 2) < 1e-9;
  const parameters = isSwiss
    ? degrees(wkt.lat0, 'lat_0') + degrees(wkt.longc ?? wkt.long0, 'lon_0')
    : degrees(wkt.lat0, 'lat_0') +
      degrees(wkt.lat1, 'lat_1') +
      degrees(wkt.lat2, 'lat_2') +
      degrees(wkt.lat_ts, 'lat_ts') +
      degrees(projection === 'omerc' ? undefined : (wkt.longc ?? wkt.long0), 'lon_0') +
      degrees(projection === 'omerc' ? wkt.longc : undefined, 'lonc') +
      degrees(wkt.alpha, 'alpha') +
      degrees(wkt.rectified_grid_angle, 'gamma');
  const unit = wkt.to_meter === undefined || wkt.to_meter === 1 ? ' +units=m' : ` +to_meter=${wkt.to_meter}`;
  const sphere = /auxiliary_?sphere|pseudo.?mercator/i.test(text) ? ' +a=6378137 +b=6378137' : ` ${datum.text}`;
  // South Africa counts from north and east; the dialect of .prj files says it by the projection alone.
  const turned = wkt.axis === 'wsu' || wkt.axis === 'swu' || /south_?orient/i.test(wkt.projName ?? '') ? ' +axis=wsu' : '';
  const placed = fixedParameters[projection] ?? parameters + plain(wkt.k0, 'k');
  return { definition: `+proj=${isSwiss ? 'somerc' : projection}${placed}${plain(wkt.x0, 'x_0')}${plain(wkt.y0, 'y_0')}${sphere}${primeMeridian(wkt, text)}${unit}${turned} +no_defs`, assumedDatum: datum.assumed };
}

function datumText(wkt: ParsedWkt, text: string): { text: string; assumed: boolean } | { reason: string } {
  const name = /DATUM\s*[[(]\s*"([^"]*)"/i.exec(text)?.[1] ?? wkt.datumCode ?? '';
  if (needsCorrectionGrid(name)) return { reason: 'NAD 27 needs a correction grid that is not part of this program' };
  const a = wkt.a ?? NaN;
  const inverseFlattening = wkt.rf ?? NaN;
  if (!(a > 6.3e6 && a < 6.4e6)) return { reason: 'its ellipsoid is not that of the Earth' };
  const ellipsoid = isModernEllipsoid(a, inverseFlattening) ? '+ellps=GRS80' : inverseFlattening > 0 && Number.isFinite(inverseFlattening) ? `+a=${a} +rf=${inverseFlattening}` : `+a=${a} +b=${a}`;
  const shift = datumShift(name);
  if (shift !== null) return { text: `${ellipsoid} ${shift}`.trim(), assumed: false };
  if (wkt.datum_params !== undefined && wkt.datum_params.length >= 3) return { text: `${ellipsoid} +towgs84=${wkt.datum_params.map(Number).join(',')}`, assumed: false };
  if (isModernEllipsoid(a, inverseFlattening)) return { text: ellipsoid, assumed: true };
  return { reason: `its datum "${name}" is not known` };
}

/** Old French maps count angles in grads; the parser takes every angle for degrees. */
function angularUnit(text: string): number {
  const unit = /GEOGCS[\s\S]*?UNIT\s*[[(]\s*"[^"]*"\s*,\s*([0-9.eE+-]+)/i.exec(text)?.[1];
  const radians = Number(unit);
  return unit === undefined || !(radians > 0) || Math.abs(radians - Math.PI / 180) < 1e-8 ? 1 : (radians * 180) / Math.PI;
}

function primeMeridian(wkt: ParsedWkt, text: string): string {
  if (/PRIMEM\s*[[(]\s*"Paris"/i.test(text)) return ' +pm=2.33722917';
  const degrees = ((wkt.from_greenwich ?? 0) * 180) / Math.PI;
  return Math.abs(degrees) < 1e-9 ? '' : ` +pm=${round(degrees)}`;
}

/** Rounds off what the turn through radians added: 1e-12 degrees are a ten-millionth of a metre. */
function round(value: number): number {
  return Number(value.toPrecision(14));
}
