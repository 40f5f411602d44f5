import { describe, expect, it } from 'vitest';
import { groundAreaHa, planeAreaHa, utmAreaScale } from '../../shared/geo/area.ts';
import { convergenceDeg, fromUtm, toUtm, utmDefinition, utmEpsg, utmZone } from '../../shared/geo/utm.ts';

describe('UTM', () => {
  // Source: PROJ (cs2cs), three decimals.
  it.each([
    [[-122.2869, 38.2975], 10, 32610, 562354.881, 4239064.589],
    [[138.96, -34.53], 54, 32754, 312774.237, 6177186.352],
    [[5.32, 60.39], 32, 32632, 297230.22, 6700510.175],
    [[180, 0], 1, 32601, 166021.443, 0],
    [[-0.58, 44.84], 30, 32630, 691263.505, 4968025.688],
  ] as const)('projects %j into zone %i', (lonLat, zone, epsg, x, y) => {
    expect(utmZone(lonLat)).toBe(zone);
    expect(utmEpsg(lonLat)).toBe(epsg);
    const xy = toUtm(lonLat, epsg);
    expect(xy[0]).toBeCloseTo(x, 3);
    expect(xy[1]).toBeCloseTo(y, 3);
  });

  // Source: the zones as the definition of the UTM grid widens them, around Svalbard and south-west Norway.
  it.each([
    [[8.9, 78], 31], [[9, 78], 33], [[20.9, 78], 33], [[21, 78], 35], [[33, 78], 37], [[41.9, 78], 37], [[42, 78], 38],
    [[2.9, 60], 31], [[3, 60], 32], [[3, 64], 31], [[3, 55.9], 31], [[-180, 10], 1], [[179.9, 10], 60],
  ] as const)('puts %j into zone %i', (lonLat, zone) => {
    expect(utmZone(lonLat)).toBe(zone);
  });

  it('goes there and back within a tenth of a millimetre', () => {
    for (const [lon, lat] of [[-3, 40], [0.5, 44.8], [-5.99, 42.1]] as const) {
      expect(fromUtm(toUtm([lon, lat], 32630), 32630)).toEqual([expect.closeTo(lon, 9), expect.closeTo(lat, 9)]);
    }
  });

  // Source: PROJ factors at the mean of the corners of two blocks.
  it.each([
    [[[-1.8012, 42.5101], [-1.7985, 42.5104], [-1.7981, 42.5083], [-1.8009, 42.508]], 0.811135],
    [[[138.9903, -34.5302], [138.9941, -34.5306], [138.9936, -34.5329], [138.9918, -34.5318], [138.9899, -34.5325]], 1.138611],
  ] as const)('knows how far grid north lies from true north', (corners, degrees) => {
    const mean = (axis: 0 | 1) => corners.reduce((sum, corner) => sum + corner[axis], 0) / corners.length;
    const middle = [mean(0), mean(1)] as const;
    expect(convergenceDeg(middle, utmEpsg(middle))).toBeCloseTo(degrees, 6);
  });

  it('refuses what is not a position or not a zone, and says so', () => {
    expect(() => utmEpsg([10, 91])).toThrow(/10, 91 is not a longitude and latitude/);
    expect(() => utmEpsg([NaN, 45])).toThrow(/not a longitude/);
    expect(() => utmDefinition(4326)).toThrow(/EPSG:4326 is not a UTM zone/);
    expect(() => utmDefinition(32661)).toThrow(/not a UTM zone/);
  });
});

describe('areas of outlines in degrees', () => {
  // Source: geodesic areas by pyproj 3.4.1, Geod(ellps="WGS84").polygon_area_perimeter.
  it.each([
    [[[-3.005, 42], [-2.995, 42], [-2.995, 42.01], [-3.005, 42.01]], 920179.3719],
    [[[-1.8012, 42.5101], [-1.7985, 42.5104], [-1.7981, 42.5083], [-1.8009, 42.508]], 53681.98412],
    [[[138.9903, -34.5302], [138.9941, -34.5306], [138.9936, -34.5329], [138.9918, -34.5318], [138.9899, -34.5325]], 72612.9726],
  ] as const)('on the ground agree with geodesic areas, outline %#', (corners, areaM2) => {
    const outline = [[[...corners, corners[0]]]];
    expect(groundAreaHa(outline) * 10_000).toBeCloseTo(areaM2, areaM2 > 1e5 ? 0 : 1);
  });

  it('on the plane differ by the scale of the projection, 0.9996² on the central meridian', () => {
    const outline = [[[[-3.005, 42], [-2.995, 42], [-2.995, 42.01], [-3.005, 42.01], [-3.005, 42]]]] as const;
    expect(utmAreaScale(outline)).toBeCloseTo(0.9996 ** 2, 7);
    expect(planeAreaHa(outline) / groundAreaHa(outline)).toBeCloseTo(0.9996 ** 2, 7);
  });

  // Source: the plane area of the first block in UTM zone 30, by pyproj.
  it('on the plane are those of the projected corners', () => {
    const corners = [[-1.8012, 42.5101], [-1.7985, 42.5104], [-1.7981, 42.5083], [-1.8009, 42.508], [-1.8012, 42.5101]] as const;
    expect(planeAreaHa([[corners]]) * 10_000).toBeCloseTo(53651.888, 3);
  });
});
