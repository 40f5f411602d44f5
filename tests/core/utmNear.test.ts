import { describe, expect, it } from 'vitest';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { LonLat } from '../../shared/geo/coordinates.ts';
import { toUtm, utmEpsg } from '../../shared/geo/utm.ts';
import { toUtmNear } from '../../shared/geo/utmNear.ts';

/** Positions spread over a square of the given width in degrees. */
function spread(lon: number, lat: number, widthDeg: number): LonLat[] {
  const random = seededRandom(3);
  return Array.from({ length: 300 }, (): LonLat => [lon + widthDeg * (random() - 0.5), lat + widthDeg * (random() - 0.5)]);
}

describe('many positions of one place', () => {
  it.each([
    ['a block in the north', 4.7, 47.1, 0.01],
    ['ten kilometres in the south', -71.6, -34.6, 0.1],
    ['the edge of a zone, far north', 11.98, 60.2, 0.05],
    ['a whole region, projected one by one', 0.4, 44.8, 1.5],
  ])('lie where the projection puts each of them: %s', (_name, lon, lat, widthDeg) => {
    const positions = spread(lon, lat, widthDeg);
    const epsg = utmEpsg([lon, lat]);
    const { x, y } = toUtmNear(positions, epsg);
    positions.forEach((position, at) => {
      const [east, north] = toUtm(position, epsg); // proj4
      expect(Math.abs(x[at]! - east)).toBeLessThan(1e-5);
      expect(Math.abs(y[at]! - north)).toBeLessThan(1e-5);
    });
  });

  it('may be none, one, or all in one column', () => {
    expect(toUtmNear([], 32631).x).toHaveLength(0);
    expect(toUtmNear([[3, 45]], 32631).x[0]).toBeCloseTo(500_000, 6);
    const column = Array.from({ length: 40 }, (_, at): LonLat => [3, 45 + at / 1e5]);
    expect(Math.max(...toUtmNear(column, 32631).x.map((east) => Math.abs(east - 500_000)))).toBeLessThan(1e-6);
  });
});
