import { describe, expect, it } from 'vitest';
import { contourFeatures, zoneFeatures } from '../../src/components/map/mapFeatures.ts';
import { mapLayers, mapSources, mapStyle, type MapInk } from '../../src/components/map/mapStyle.ts';
import { cornersFrom, cornersFromText, ringFrom, withCornerAfter } from '../../src/components/map/outline.ts';
import { cellPixels } from '../../src/lib/cellPicture.ts';
import { contourLines } from '../../src/lib/contourLines.ts';
import { extentOf, isInside, namePlace, visualCentre } from '../../src/lib/mapPlaces.ts';
import { reliefPixels } from '../../src/lib/reliefPicture.ts';

const ink: MapInk = { land: '#EFEBDF', ground: '#F6F4EE', ink: '#1C2B33', contour: '#BFB397', contourIndex: '#A39470', water: '#8FB4BC', track: '#FBFAF6', trackEdge: '#B8AE97', zoneLine: '#1C2B33', brick: '#9B2318', sky: '#0B5CAD', amber: '#8A5200', muted: '#5F655F' };
const grid = (columns: number, rows: number, height: (column: number, row: number) => number) => ({ columns, rows, cellSizeM: 1, cells: Float64Array.from({ length: columns * rows }, (_, cell) => height(cell % columns, Math.floor(cell / columns))) });

describe('map style', () => {
  it('asks for nothing from outside', () => {
    const style = mapStyle(ink);
    expect(style.glyphs).toBeUndefined();
    expect(style.sprite).toBeUndefined();
    expect(JSON.stringify(style)).not.toMatch(/https?:\/\//);
  });

  it('every layer draws from a source of ours, and ids are used once', () => {
    const layers = mapLayers(ink);
    expect(new Set(layers.map(({ id }) => id)).size).toBe(layers.length);
    expect(layers.flatMap((layer) => ('source' in layer ? [layer.source] : [])).filter((source) => !(mapSources as readonly string[]).includes(source as string))).toEqual([]);
  });

  it('the leader lies under every block', () => {
    const order = mapLayers(ink).map(({ id }) => id);
    expect(order.indexOf('leader')).toBeLessThan(order.indexOf('block-halo'));
    expect(order.indexOf('zone-fill')).toBeLessThan(order.indexOf('restriction-fill'));
  });
});

describe('contours', () => {
  it('of an even slope are straight, one a step, and in the right place', () => {
    const lines = contourLines(grid(11, 6, (column) => column * 2), 5);
    expect(lines.map(({ heightM }) => heightM)).toEqual([0, 5, 10, 15, 20].filter((height) => lines.some((line) => line.heightM === height)));
    for (const { heightM, points } of lines.filter((line) => line.heightM > 0 && line.heightM < 20)) {
      expect(points).toHaveLength(6);
      for (const [column] of points) expect(column).toBeCloseTo(heightM / 2, 9);
    }
  });

  it('of a cone are closed rings of the radius', () => {
    const lines = contourLines(grid(41, 41, (column, row) => 30 - Math.hypot(column - 20, row - 20)), 10);
    const ring = lines.find(({ heightM }) => heightM === 20)!;
    expect(ring.points[0]).toEqual(ring.points.at(-1));
    // Linear interpolation along cell edges of a cone errs by less than 0.02 cells at this radius.
    for (const [column, row] of ring.points) expect(Math.hypot(column - 20, row - 20)).toBeCloseTo(10, 1);
  });

  it('stop where heights are missing', () => {
    const lines = contourLines(grid(10, 10, (column, row) => (row === 5 ? Number.NaN : column)), 4.5);
    expect(lines.filter(({ heightM }) => heightM === 4.5)).toHaveLength(2);
  });

  it('each fifth is an index contour', () => {
    const features = contourFeatures([100, 105, 125].map((heightM) => ({ heightM, points: [[0, 0], [1, 0], [2, 0], [3, 0]] as const })), { corners: [[0, 1], [1, 1], [1, 0], [0, 0]], columns: 4, rows: 4, stepM: 5, text: (heightM) => `${heightM} m` });
    expect(features.features.map(({ properties }) => properties?.index)).toEqual([true, false, true]);
  });
});

describe('hillshade', () => {
  const ink2 = { shade: '#000000', light: '#FFFFFF' };
  const middle = (pixels: Uint8ClampedArray, columns: number, rows: number) => [...pixels.slice(4 * (Math.floor(rows / 2) * columns + Math.floor(columns / 2)), 4 * (Math.floor(rows / 2) * columns + Math.floor(columns / 2)) + 4)];

  it('ground that falls to the north-west is lit, to the south-east in shade, level ground clear', () => {
    const size = 41;
    // Row 0 is the north: heights that grow with column and row fall towards the north-west.
    const lit = middle(reliefPixels(grid(size, size, (column, row) => 0.2 * (column + row)), ink2), size, size);
    const shaded = middle(reliefPixels(grid(size, size, (column, row) => -0.2 * (column + row)), ink2), size, size);
    const level = middle(reliefPixels(grid(size, size, () => 100), ink2), size, size);
    expect(lit.slice(0, 3)).toEqual([255, 255, 255]);
    expect(shaded.slice(0, 3)).toEqual([0, 0, 0]);
    expect(lit[3]).toBeGreaterThan(0);
    expect(shaded[3]).toBeGreaterThan(0);
    expect(level[3]).toBe(0);
  });
});

describe('cells', () => {
  it('are coloured from low to high, and a missing cell is clear', () => {
    const pixels = cellPixels({ cells: [0.2, 0.8, Number.NaN, 0], columns: 4, rows: 1, ramp: 'vigour', range: [0.2, 0.8] });
    expect([...pixels.slice(0, 4)]).toEqual([0x1c, 0x0e, 0x34, 255]);
    expect([...pixels.slice(4, 8)]).toEqual([0xef, 0xfc, 0xdd, 255]);
    expect(pixels[11]).toBe(0);
    expect([...pixels.slice(12, 16)]).toEqual([0x1c, 0x0e, 0x34, 255]);
  });
});

describe('places on outlines', () => {
  /** An L: 10 wide and high, arms 3 thick. Its bounding box's middle is outside. */
  const ell = { type: 'Polygon' as const, coordinates: [[[0, 0], [10, 0], [10, 3], [3, 3], [3, 10], [0, 10], [0, 0]]] };

  it('a number stands inside even where the middle is not', () => {
    expect(isInside(ell.coordinates, 5, 5)).toBe(false);
    const [lon, lat] = visualCentre(ell);
    expect(isInside(ell.coordinates, lon, lat)).toBe(true);
  });

  it('a name is turned to the rows, and level when they are steep', () => {
    expect(namePlace(ell, 100).turnDeg).toBe(10);
    expect(namePlace(ell, 280).turnDeg).toBe(10);
    expect(namePlace(ell, 75).turnDeg).toBe(-15);
    expect(namePlace(ell, 170).turnDeg).toBe(0);
    expect(namePlace(ell, null).turnDeg).toBe(0);
  });

  it('a level name stands above the outline', () => {
    const square = { type: 'Polygon' as const, coordinates: [[[0, 0], [2, 0], [2, 1], [0, 1], [0, 0]]] };
    const { lonLat } = namePlace(square, 90);
    expect(lonLat[0]).toBeCloseTo(1, 1);
    expect(lonLat[1]).toBeCloseTo(1, 9);
  });

  it('the extent holds every corner', () => {
    expect(extentOf([ell])).toEqual([0, 0, 10, 10]);
    expect(extentOf([])).toBeNull();
  });

  it('zones name the image of their colour set and number', () => {
    const features = zoneFeatures([{ id: 'a', blockId: 'b', zone: 2, count: 3, geometry: ell }]);
    expect(features.features[0]!.properties).toMatchObject({ id: 'a', pattern: 'zone-ordered-3-2' });
  });
});

describe('drawn outlines', () => {
  const corners = [[0, 0], [1, 0], [1, 1]] as const;

  it('close into a ring and open again', () => {
    expect(ringFrom(corners)).toEqual([[0, 0], [1, 0], [1, 1], [0, 0]]);
    expect(cornersFrom(ringFrom(corners))).toEqual(corners.map((corner) => [...corner]));
  });

  it('take a corner half way to the next, also from the last to the first', () => {
    expect(withCornerAfter(corners, 2)).toEqual([[0, 0], [1, 0], [1, 1], [0.5, 0.5]]);
  });

  it.each([
    ['3.5\t43.5\n3.6\t43.5', [[3.5, 43.5], [3.6, 43.5]]],
    ['3,5; 43,5', [[3.5, 43.5]]],
    ['3.5, 43.5', [[3.5, 43.5]]],
    ['3.5,43.5', [[3.5, 43.5]]],
  ])('pasted %j is read', (text, read) => {
    expect(cornersFromText(text)).toEqual(read);
  });

  it.each(['', 'north', '3.5 95', '3.5 43.5\nbad'])('pasted %j is refused as a whole', (text) => {
    expect(cornersFromText(text)).toBeNull();
  });
});
