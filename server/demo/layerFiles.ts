import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { fromUtm, toUtm } from '../../shared/geo/utm.ts';
import { geoTiffBytes } from '../exporters/geoTiffBytes.ts';
import { extentOf, type Ground } from './ground.ts';
import type { DemoPlace } from './demoPlace.ts';
import { blocks, type DemoBlock } from './marlhaven.ts';

export interface DemoFile {
  name: string;
  bytes: Buffer;
}

const margin = 40;

interface Frame {
  anchor: readonly [number, number];
  minX: number;
  minY: number;
  maxX: number;
  maxY: number;
}

/** Rectangle round all blocks, in metres from the anchor. */
export function frameOf(place: DemoPlace): Frame {
  const extents = blocks.map(extentOf);
  const [anchorX, anchorY] = toUtm([place.anchorLonLat[0], place.anchorLonLat[1]], place.epsg);
  return {
    anchor: [Math.round(anchorX), Math.round(anchorY)],
    minX: Math.min(...extents.map((extent) => extent[0])) - margin,
    minY: Math.min(...extents.map((extent) => extent[1])) - margin,
    maxX: Math.max(...extents.map((extent) => extent[2])) + margin,
    maxY: Math.max(...extents.map((extent) => extent[3])) + margin,
  };
}

/** A block's outline in longitude and latitude, closed, counter-clockwise. */
export function outlineLonLat(block: DemoBlock, place: DemoPlace): [number, number][] {
  const { anchor } = frameOf(place);
  const ring = block.ringM.map(([x, y]): [number, number] => {
    const [lon, lat] = fromUtm([anchor[0] + x, anchor[1] + y], place.epsg);
    return [Number(lon.toFixed(8)), Number(lat.toFixed(8))];
  });
  const closed = [...ring, ring[0]!];
  const doubled = closed.slice(1).reduce((sum, [x, y], index) => sum + (closed[index]![0] * y - x * closed[index]![1]), 0);
  return doubled >= 0 ? closed : closed.reverse();
}

/** Red and near-infrared in 16 bits at half a metre, with rows, alleys, noise and places without a vine. */
export function vigourImage(ground: Ground, options: { seed: number; year: number; gain: number }): DemoFile {
  const pixel = 0.5;
  const { anchor, minX, minY, maxX, maxY } = frameOf(ground.place);
  const width = Math.round((maxX - minX) / pixel);
  const height = Math.round((maxY - minY) / pixel);
  const red = new Uint16Array(width * height).fill(2300);
  const nearInfrared = new Uint16Array(width * height).fill(2700);
  const random = seededRandom(options.seed);
  for (const block of blocks) {
    const vigour = ground.vigour(block);
    const [x0, y0, x1, y1] = extentOf(block);
    const bearing = (block.rowBearingDeg * Math.PI) / 180;
    const [acrossX, acrossY] = [Math.cos(bearing), -Math.sin(bearing)];
    const [alongX, alongY] = [Math.sin(bearing), Math.cos(bearing)];
    const gaps = new Set<number>();
    for (let i = 0; i < 220; i++) gaps.add(Math.floor(random() * 100_000));
    for (let row = Math.floor((maxY - y1 - 4) / pixel); row < Math.ceil((maxY - y0 + 4) / pixel); row++) {
      for (let col = Math.floor((x0 - 4 - minX) / pixel); col < Math.ceil((x1 + 4 - minX) / pixel); col++) {
        const x = minX + (col + 0.5) * pixel;
        const y = maxY - (row + 0.5) * pixel;
        if (!insideRing(block.ringM, x, y)) continue;
        const across = (x * acrossX + y * acrossY) / block.rowSpacingM;
        const along = Math.floor((x * alongX + y * alongY) / block.vineSpacingM);
        const inRow = Math.exp(-(((across - Math.round(across)) * block.rowSpacingM) ** 2) / (2 * 0.42 ** 2));
        const gone = gaps.has(Math.abs(Math.round(across) * 977 + along) % 100_000);
        const canopy = gone ? 0.05 : inRow * (0.35 + 0.75 * vigour(x, y) * options.gain);
        const at = row * width + col;
        red[at] = Math.max(150, Math.round(2250 - 1500 * canopy + 90 * randomNormal(random)));
        nearInfrared[at] = Math.max(200, Math.round(2600 + 2700 * canopy + 150 * randomNormal(random)));
      }
    }
  }
  const bytes = geoTiffBytes({ width, height, bands: [red, nearInfrared], epsg: ground.place.epsg, originX: anchor[0] + minX, originY: anchor[1] + maxY, pixelSize: pixel, noData: 0, description: 'red, near infrared' });
  return { name: `vigour-${options.year}.tif`, bytes };
}

/** Elevation at two metres, float, in metres. */
export function elevationModel(ground: Ground): DemoFile {
  const pixel = 2;
  const { anchor, minX, minY, maxX, maxY } = frameOf(ground.place);
  const width = Math.round((maxX - minX) / pixel);
  const height = Math.round((maxY - minY) / pixel);
  const metres = new Float32Array(width * height);
  for (let row = 0; row < height; row++) for (let col = 0; col < width; col++) metres[row * width + col] = ground.elevationM(minX + (col + 0.5) * pixel, maxY - (row + 0.5) * pixel);
  return { name: 'elevation.tif', bytes: geoTiffBytes({ width, height, bands: [metres], epsg: ground.place.epsg, originX: anchor[0] + minX, originY: anchor[1] + maxY, pixelSize: pixel, noData: -9999, description: 'elevation, m' }) };
}

/** Conductivity points along every sixth alley, with the usual faults: standing still, negative, doubled. */
export function conductivityPoints(ground: Ground, seed: number): DemoFile {
  const { anchor } = frameOf(ground.place);
  const random = seededRandom(seed);
  const lines = ['latitude,longitude,ec_deep_mS_m,speed_kmh'];
  for (const block of blocks) {
    const conductivity = ground.conductivity(block);
    const bearing = (block.rowBearingDeg * Math.PI) / 180;
    const [x0, y0, x1, y1] = extentOf(block);
    const reach = Math.hypot(x1 - x0, y1 - y0) / 2;
    const [cx, cy] = [(x0 + x1) / 2, (y0 + y1) / 2];
    for (let s = -reach; s <= reach; s += block.rowSpacingM * 6) {
      for (let t = -reach; t <= reach; t += 3) {
        const x = cx + s * Math.cos(bearing) + t * Math.sin(bearing);
        const y = cy - s * Math.sin(bearing) + t * Math.cos(bearing);
        if (!insideRing(block.ringM, x, y)) continue;
        const [lon, lat] = fromUtm([anchor[0] + x, anchor[1] + y], ground.place.epsg);
        const fault = random();
        const value = fault < 0.004 ? -conductivity(x, y) : conductivity(x, y) + 1.1 * randomNormal(random);
        lines.push(`${lat.toFixed(7)},${lon.toFixed(7)},${value.toFixed(1)},${(fault > 0.992 ? 0 : 5 + random()).toFixed(1)}`);
      }
    }
  }
  return { name: 'conductivity.csv', bytes: Buffer.from(`${lines.join('\r\n')}\r\n`) };
}

/** Soil map: squares of 20 m joined into classes by depth, as GeoJSON with the attributes of a survey. */
export function soilMap(ground: Ground): DemoFile {
  const { anchor, minX, minY, maxX, maxY } = frameOf(ground.place);
  const cell = 20;
  const classes = [
    { name: 'Shallow marl', holdsMm: 62, from: 0, to: 0.85 },
    { name: 'Clay loam on marl', holdsMm: 108, from: 0.85, to: 1.2 },
    { name: 'Deep hollow soil', holdsMm: 154, from: 1.2, to: 9 },
  ];
  const features = classes.map((soil) => {
    const polygons: number[][][][] = [];
    for (let y = minY; y < maxY; y += cell) {
      let runStart: number | null = null;
      for (let x = minX; x <= maxX; x += cell) {
        const depth = ground.soilDepthM(x + cell / 2, y + cell / 2);
        const within = x < maxX && depth >= soil.from && depth < soil.to;
        if (within && runStart === null) runStart = x;
        if (!within && runStart !== null) {
          polygons.push([[[runStart, y], [x, y], [x, y + cell], [runStart, y + cell], [runStart, y]].map(([px, py]) => [...fromUtm([anchor[0] + px!, anchor[1] + py!], ground.place.epsg)].map((value) => Number(value.toFixed(8))))]);
          runStart = null;
        }
      }
    }
    return { type: 'Feature', properties: { SOIL: soil.name, AWC_MM: soil.holdsMm }, geometry: { type: 'MultiPolygon', coordinates: polygons } };
  });
  return { name: 'soil-survey.geojson', bytes: Buffer.from(JSON.stringify({ type: 'FeatureCollection', features })) };
}

function insideRing(ring: readonly (readonly [number, number])[], x: number, y: number): boolean {
  let inside = false;
  for (let i = 0, j = ring.length - 1; i < ring.length; j = i++) {
    const [xi, yi] = ring[i]!;
    const [xj, yj] = ring[j]!;
    if (yi > y !== yj > y && x < ((xj - xi) * (y - yi)) / (yj - yi) + xi) inside = !inside;
  }
  return inside;
}
