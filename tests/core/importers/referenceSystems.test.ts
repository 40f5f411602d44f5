import { describe, expect, it } from 'vitest';
import { crsDefinition } from '../../../shared/geo/crsDefinitions.ts';
import { referenceChoices } from '../../../server/importers/reference/candidates.ts';
import { checkPlacement } from '../../../server/importers/reference/placement.ts';
import { distanceKm } from '../../../server/importers/reference/distance.ts';
import { referenceFromEpsg, referenceFromText, reprojectionTo, toLonLat } from '../../../server/importers/reference/referenceSystem.ts';
import type { ReferenceSystem } from '../../../server/importers/understood.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import { utm31Prj, wgs84Prj } from './corpus.ts';

/** Metres between two positions close to each other. */
function apartM(a: readonly [number, number], b: readonly [number, number]): number {
  return distanceKm([a[0], a[1]], [b[0], b[1]]) * 1000;
}

/** Computed with PROJ 9.1.1 through GDAL 3.6.2 (osr), longitude first; tolerance in metres. */
const byProj: readonly (readonly [epsg: number, x: number, y: number, lon: number, lat: number, toleranceM: number])[] = [
  [32610, 562354.880903, 4239064.589175, -122.2869, 38.2975, 0.001],
  [32754, 312774.236671, 6177186.352131, 138.96, -34.53, 0.001],
  [32632, 297230.220210, 6700510.175254, 5.32, 60.39, 0.001],
  [25830, 691263.505271, 4968025.688086, -0.58, 44.84, 0.001],
  [2154, 495327.003234, 6417894.458490, 0.41, 44.83, 0.001],
  [3945, 1495235.172379, 4184382.397436, 0.41, 44.83, 0.001],
  [27572, 780268.010076, 2231626.921879, 4.71, 47.06, 8],
  [27700, 566142.991938, 132745.998555, 0.37, 51.07, 8],
  [28992, 184072.086340, 317878.032177, 5.8, 50.85, 8],
  [31370, 152202.884089, 165505.135524, 4.4, 50.8, 8],
  [31467, 3456172.459617, 5429361.433839, 8.4, 49.0, 8],
  [31287, 598198.045123, 481257.419504, 16.0, 48.2, 8],
  [2056, 2604736.016024, 1116506.469244, 7.5, 46.2, 8],
  [21781, 604736.016024, 116506.469244, 7.5, 46.2, 8],
  [3003, 1678183.453642, 4807601.358352, 11.2, 43.4, 8],
  [23030, 541190.451711, 4705622.732054, -2.5, 42.5, 8],
  [3763, 27983.751746, 159036.981199, -7.8, 41.1, 0.001],
  [5514, -603468.482253, -1204371.567593, 16.6, 48.8, 8],
  [23700, 825208.474015, 308909.687385, 21.4, 48.1, 8],
  [3794, 500000.000000, 151148.860743, 15.0, 46.5, 0.001],
  [3765, 460924.883906, 5040130.266981, 16.0, 45.5, 0.001],
  [3844, 578952.307136, 389405.337516, 26.0, 45.0, 8],
  [2100, 372935.434306, 4495149.861577, 22.5, 40.6, 8],
  [3857, 45640.991225, 5594798.051730, 0.41, 44.83, 0.001],
  [2226, 6581708.138661, 1932993.440760, -121.93, 38.47, 0.001],
  [26943, 1841921.026423, 667993.042890, -122.3, 38.0, 0.001],
  [2269, 7533225.045497, 606231.453315, -123.1, 45.3, 0.001],
  [2286, 1893620.888515, 317646.488679, -119.5, 46.2, 0.001],
  [3310, -45255.490695, -268434.749115, -120.5, 35.6, 0.001],
  [2193, 1659213.150039, 5399941.447331, 173.71, -41.55, 0.001],
  [28354, 456734.145943, 6207806.373350, 140.53, -34.27, 0.001],
  [7854, 456734.145943, 6207806.373350, 140.53, -34.27, 0.001],
  [3111, 2544149.193055, 2433302.994189, 145.5, -37.6, 0.001],
  [31985, 293902.169975, 9113021.751554, -34.87, -8.02, 0.001],
  [5344, 2509334.984355, 6338123.310770, -68.9, -33.1, 1.5],
  [32719, 297363.711778, 6167984.702350, -71.21, -34.61, 0.001],
  [4674, -50.0, -30.0, -50, -30, 0.001],
];

describe('shipped reference systems', () => {
  it.each(byProj)('EPSG:%i puts %f, %f where PROJ puts it', (epsg, x, y, lon, lat, toleranceM) => {
    const place = toLonLat(referenceFromEpsg(epsg, 'file')!)([x, y])!;
    expect(apartM(place, [lon, lat])).toBeLessThan(toleranceM);
  });

  it('knows a state plane zone in metres, survey feet and feet', () => {
    expect(crsDefinition(26942)).toMatchObject({ unitM: 1 });
    expect(crsDefinition(2226)!.unitM).toBeCloseTo(0.3048006096, 10);
    expect(crsDefinition(2269)!.unitM).toBe(0.3048);
  });

  it('does not know what it does not ship', () => {
    expect(crsDefinition(99999)).toBeNull();
    expect(crsDefinition(26710), 'NAD 27 needs a correction grid').toBeNull();
  });

  it('takes ETRS89 and WGS 84 of the same UTM zone for the same numbers, and others not', () => {
    const reprojection = (epsg: number) => reprojectionTo(referenceFromEpsg(epsg, 'file')!, 32631, [500000, 4950000]);
    expect(reprojection(25831)).toBeUndefined();
    // Computed with PROJ through GDAL 3.6.2; the conversions of ED50 differ by some metres.
    const inZone31 = (epsg: number) => reprojection(epsg)!.forward([500000, 4950000]);
    const apart = (one: readonly number[], x: number, y: number) => Math.hypot(one[0]! - x, one[1]! - y);
    expect(apart(inZone31(23031), 499907.567, 4949796.441)).toBeLessThan(8);
    expect(apart(inZone31(32630), 24665.5869, 4967539.8639)).toBeLessThan(0.01);
  });
});

describe('texts of .prj files', () => {
  it.each([
    ['WGS 84 in the dialect of .prj files', wgs84Prj, 4326],
    ['a UTM zone in the dialect of .prj files', utm31Prj, 32631],
    ['a code', 'EPSG:2154', 2154],
    ['WKT with a code', 'PROJCS["x",GEOGCS["WGS 84",DATUM["WGS_1984",SPHEROID["WGS 84",6378137,298.257223563]],PRIMEM["Greenwich",0],UNIT["degree",0.0174532925199433]],PROJECTION["Transverse_Mercator"],PARAMETER["central_meridian",3],AUTHORITY["EPSG","32631"]]', 32631],
  ])('%s', (_, text, epsg) => {
    expect(referenceFromText(text, 'projection file')).toMatchObject({ epsg });
  });

  it('grads and the meridian of Paris come out right', () => {
    const prj = 'PROJCS["NTF_Paris_Lambert_Zone_II",GEOGCS["GCS_NTF_Paris",DATUM["D_NTF",SPHEROID["Clarke_1880_IGN",6378249.2,293.4660212936265]],PRIMEM["Paris",2.337229166666667],UNIT["Grad",0.01570796326794897]],PROJECTION["Lambert_Conformal_Conic"],PARAMETER["False_Easting",600000.0],PARAMETER["False_Northing",2200000.0],PARAMETER["Central_Meridian",0.0],PARAMETER["Standard_Parallel_1",52.0],PARAMETER["Scale_Factor",0.99987742],PARAMETER["Latitude_Of_Origin",52.0],UNIT["Meter",1.0]]';
    const byText = referenceFromText(prj, 'projection file') as ReferenceSystem;
    const position = [652650, 1966850] as const;
    expect(apartM(toLonLat(byText)(position)!, toLonLat(referenceFromEpsg(27572, 'file')!)(position)!)).toBeLessThan(0.01);
  });

  it('a datum that nobody knows on an old ellipsoid is not guessed', () => {
    const prj = 'GEOGCS["x",DATUM["D_Somewhere",SPHEROID["Clarke_1880",6378249.145,293.465]],PRIMEM["Greenwich",0],UNIT["Degree",0.0174532925199433]]';
    expect(referenceFromText(prj, 'projection file')).toEqual({ kind: 'unknown', name: 'x', reason: 'its datum "D_Somewhere" is not known' });
  });
});

describe('a file without a reference system', () => {
  const outline = [[500000, 4950000], [500100, 4950000], [500100, 4950100], [500000, 4950100], [500000, 4950000]] as const;

  it('gets candidates by distance from the estate, the true one first, each with an outline', () => {
    const choices = referenceChoices(outline, [3.001, 44.703]);
    expect(choices[0]).toMatchObject({ value: '32631', distanceKm: 0.1 });
    expect(choices[0]!.outlineLonLat).toHaveLength(5);
    expect(choices.length).toBeLessThanOrEqual(8);
    expect(choices.every(({ distanceKm: km }) => km! <= 400)).toBe(true);
  });

  it('gets no candidate out of thin air when the place of the estate is unknown', () => {
    expect(referenceChoices(outline, null).map(({ value }) => value)).toEqual(['3857']);
    expect(referenceChoices([[3, 44], [3.1, 44]], null).map(({ value }) => value)).toEqual(['4326']);
  });
});

describe('placement', () => {
  const outline = [[500000, 4950000], [500100, 4950100]] as const;
  const utm = referenceFromEpsg(32631, 'file')!;

  it('near the estate says nothing; a few kilometres off warns with the distance; far off asks', () => {
    const at = (lon: number) => checkPlacement(outline, utm, { estateLonLat: [lon, 44.703] });
    expect(at(3.001)).toMatchObject({ questions: [], warnings: [] });
    // 0.1 degrees of longitude at 44.7° N are 7.9 km on a sphere of 6371 km.
    expect(at(3.101).warnings[0]).toMatchObject({ code: 'far-from-estate', params: { km: 7.9 } });
    // 2.4987 degrees of longitude at 44.7° N are 197.4 km along the great circle.
    expect(at(5.5).questions[0]).toMatchObject({ code: 'placement', why: { code: 'far', params: { km: 197, name: utm.name } } });
  });

  it('numbers of another system become a question with the right one among the answers', () => {
    const { outlineLonLat, questions } = checkPlacement(outline, referenceFromEpsg(4326, 'file')!, { estateLonLat: [3.001, 44.703] });
    expect(outlineLonLat).toBeNull();
    expect(questions[0]!.choices[0]!.value).toBe('32631');
    expect(questions[0]!.why).toMatchObject({ code: 'impossible', params: { x: '500000', y: '4950000' } });
  });
});

it('the check positions of UTM come back (PROJ)', () => {
  const [x, y] = toUtm([5.32, 60.39], 32632);
  expect([x.toFixed(3), y.toFixed(3)]).toEqual(['297230.220', '6700510.175']);
});
