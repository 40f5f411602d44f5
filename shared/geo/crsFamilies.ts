/**
 * Reference systems that follow a rule: UTM zones of the datums in use, and latitude/longitude of these datums.
 * Datum shifts are the ones commonly used without a correction grid; how well they fit: datumAccuracy.ts.
 * Codes and parameters: EPSG Geodetic Parameter Dataset (IOGP).
 */
import type { GridRow } from './crsRow.ts';

/** Code = base + zone. */
interface UtmFamily {
  readonly base: number;
  readonly zones: readonly [first: number, last: number];
  readonly name: string;
  readonly datum: string;
  readonly south: boolean;
}

const family = (base: number, zones: readonly [number, number], name: string, datum: string): UtmFamily => ({ base, zones, name: name.slice(0, -1).trimEnd(), datum, south: name.endsWith('S') });

const GRS80 = '+ellps=GRS80';
const ED50 = '+ellps=intl +towgs84=-87,-98,-121,0,0,0,0';
const AGD66 = '+ellps=aust_SA +towgs84=-117.808,-51.536,137.784,0.303,0.446,0.234,-0.29';
const AGD84 = '+ellps=aust_SA +towgs84=-134,-48,149,0,0,0,0';
const SAD69 = '+ellps=aust_SA +towgs84=-67.35,3.88,-38.22,0,0,0,0';
const PSAD56 = '+ellps=intl +towgs84=-288,175,-376,0,0,0,0';
const WGS72 = '+ellps=WGS72 +towgs84=0,0,4.5,0,0,0.554,0.2263';
const NTF = '+ellps=clrk80ign +towgs84=-168,-60,320,0,0,0,0';
const OSGB36 = '+ellps=airy +towgs84=446.448,-125.157,542.06,0.15,0.247,0.842,-20.489';

/** The first family that holds a code names it; WGS 84 is first. */
const utmFamilies: readonly UtmFamily[] = [
  family(32600, [1, 60], 'WGS 84 N', '+datum=WGS84'),
  family(32700, [1, 60], 'WGS 84 S', '+datum=WGS84'),
  family(25800, [28, 38], 'ETRS89 N', GRS80),
  family(23000, [28, 38], 'ED50 N', ED50),
  family(26900, [1, 23], 'NAD83 N', '+datum=NAD83'),
  family(3730, [10, 19], 'NAD83(HARN) N', GRS80),
  family(3707, [1, 19], 'NAD83(NSRS2007) N', GRS80),
  family(6329, [1, 19], 'NAD83(2011) N', GRS80),
  family(2944, [11, 13], 'NAD83(CSRS) N', GRS80),
  family(2941, [17, 21], 'NAD83(CSRS) N', GRS80),
  family(22200, [7, 22], 'NAD83(CSRS)v2 N', GRS80),
  family(22300, [7, 22], 'NAD83(CSRS)v3 N', GRS80),
  family(22400, [7, 22], 'NAD83(CSRS)v4 N', GRS80),
  family(22600, [7, 22], 'NAD83(CSRS)v6 N', GRS80),
  family(22700, [7, 22], 'NAD83(CSRS)v7 N', GRS80),
  family(28300, [48, 58], 'GDA94 S', GRS80),
  family(7800, [46, 59], 'GDA2020 S', GRS80),
  family(20200, [49, 58], 'AGD66 S', AGD66),
  family(20300, [48, 57], 'AGD84 S', AGD84),
  family(31954, [17, 22], 'SIRGAS 2000 N', GRS80),
  family(31960, [17, 25], 'SIRGAS 2000 S', GRS80),
  family(31969, [17, 22], 'SIRGAS 1995 N', GRS80),
  family(31975, [17, 25], 'SIRGAS 1995 S', GRS80),
  family(29170, [18, 25], 'SAD69 S', SAD69),
  family(24860, [17, 22], 'PSAD56 S', PSAD56),
  family(32200, [1, 60], 'WGS 72 N', WGS72),
  family(32300, [1, 60], 'WGS 72 S', WGS72),
  family(7759, [32, 34], 'RDN2008 N', GRS80),
  family(6675, [32, 34], 'RDN2008 N', GRS80),
  family(3032, [32, 33], 'IGM95 N', GRS80),
  family(3734, [33, 34], 'HTRS96 N', GRS80),
  family(4055, [27, 28], 'REGCAN95 N', GRS80),
  family(6637, [51, 55], 'JGD2011 N', GRS80),
  family(3046, [51, 55], 'JGD2000 N', GRS80),
  family(4473, [11, 16], 'Mexico ITRF92 N', GRS80),
  family(6355, [11, 16], 'Mexico ITRF2008 N', GRS80),
];

/** Latitude and longitude in degrees on the datums above. */
export const geographicRows: readonly GridRow[] = [
  [4326, 'WGS 84', '+proj=longlat +datum=WGS84'],
  [4979, 'WGS 84 (3D)', '+proj=longlat +datum=WGS84'],
  [4258, 'ETRS89', `+proj=longlat ${GRS80}`],
  [4269, 'NAD83', '+proj=longlat +datum=NAD83'],
  [4152, 'NAD83(HARN)', `+proj=longlat ${GRS80}`],
  [4759, 'NAD83(NSRS2007)', `+proj=longlat ${GRS80}`],
  [6318, 'NAD83(2011)', `+proj=longlat ${GRS80}`],
  [4617, 'NAD83(CSRS)', `+proj=longlat ${GRS80}`],
  [4283, 'GDA94', `+proj=longlat ${GRS80}`],
  [7844, 'GDA2020', `+proj=longlat ${GRS80}`],
  [4167, 'NZGD2000', `+proj=longlat ${GRS80}`],
  [4674, 'SIRGAS 2000', `+proj=longlat ${GRS80}`],
  [4170, 'SIRGAS 1995', `+proj=longlat ${GRS80}`],
  [4171, 'RGF93', `+proj=longlat ${GRS80}`],
  [6706, 'RDN2008', `+proj=longlat ${GRS80}`],
  [4670, 'IGM95', `+proj=longlat ${GRS80}`],
  [4081, 'REGCAN95', `+proj=longlat ${GRS80}`],
  [4148, 'Hartebeesthoek94', '+proj=longlat +ellps=WGS84'],
  [4190, 'POSGAR 98', `+proj=longlat ${GRS80}`],
  [5340, 'POSGAR 2007', `+proj=longlat ${GRS80}`],
  [5360, 'SIRGAS-Chile', `+proj=longlat ${GRS80}`],
  [4490, 'CGCS2000', `+proj=longlat ${GRS80}`],
  [4612, 'JGD2000', `+proj=longlat ${GRS80}`],
  [6668, 'JGD2011', `+proj=longlat ${GRS80}`],
  [4322, 'WGS 72', `+proj=longlat ${WGS72}`],
  [4230, 'ED50', `+proj=longlat ${ED50}`],
  [4275, 'NTF', `+proj=longlat ${NTF}`],
  [4277, 'OSGB36', `+proj=longlat ${OSGB36}`],
  [4202, 'AGD66', `+proj=longlat ${AGD66}`],
  [4203, 'AGD84', `+proj=longlat ${AGD84}`],
  [4618, 'SAD69', `+proj=longlat ${SAD69}`],
  [4248, 'PSAD56', `+proj=longlat ${PSAD56}`],
  [4314, 'DHDN', '+proj=longlat +ellps=bessel +towgs84=598.1,73.7,418.2,0.202,0.045,-2.455,6.7'],
  [4312, 'MGI', '+proj=longlat +ellps=bessel +towgs84=577.326,90.129,463.919,5.137,1.474,5.297,2.4232'],
  [4289, 'Amersfoort', '+proj=longlat +ellps=bessel +towgs84=565.4171,50.3319,465.5524,-0.398957,0.343988,-1.8774,4.0725'],
  [4313, 'BD72', '+proj=longlat +ellps=intl +towgs84=-106.8686,52.2978,-103.7239,0.3366,-0.457,1.8422,-1.2747'],
  [4149, 'CH1903', '+proj=longlat +ellps=bessel +towgs84=674.374,15.056,405.346,0,0,0,0'],
  [4150, 'CH1903+', '+proj=longlat +ellps=bessel +towgs84=674.374,15.056,405.346,0,0,0,0'],
  [4265, 'Monte Mario', '+proj=longlat +ellps=intl +towgs84=-104.1,-49.1,-9.9,0.971,-2.917,0.714,-11.68'],
  [4272, 'NZGD49', '+proj=longlat +ellps=intl +towgs84=59.47,-5.04,187.44,0.47,-0.1,1.024,-4.5993'],
  [4222, 'Cape', '+proj=longlat +a=6378249.145 +rf=293.4663077 +towgs84=-136,-108,-292,0,0,0,0'],
];

/** UTM zone by code, or null. */
export function utmRow(epsg: number): GridRow | null {
  const found = utmFamilies.find(({ base, zones }) => epsg >= base + zones[0] && epsg <= base + zones[1]);
  if (found === undefined) return null;
  const zone = epsg - found.base;
  const letter = found.south ? 'S' : 'N';
  return [epsg, `${found.name} / UTM zone ${zone}${letter}`, `+proj=utm +zone=${zone}${found.south ? ' +south' : ''} ${found.datum}`];
}

/** Codes of every UTM zone of the given number and hemisphere. */
export function utmCodes(zone: number, south: boolean): number[] {
  return utmFamilies.filter((each) => each.south === south && zone >= each.zones[0] && zone <= each.zones[1]).map((each) => each.base + zone);
}
