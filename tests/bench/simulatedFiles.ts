/**
 * A made-up block as the files an estate would have: outline, a two-band picture with vine rows, swaths and a gap, elevation,
 * soil areas, a conductivity survey and readings of fruit. Nothing here describes a real place.
 */

import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { cellCentre, type Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, seededRandom, type Random } from '../../shared/analysis/random.ts';
import { fromUtm, polygonsFromUtm } from '../../shared/geo/utm.ts';
import { geoTiffBytes } from '../../server/exporters/geoTiffBytes.ts';
import { planeField, smoothField } from './simulatedFields.ts';
import { zonedBlock, type SimulatedBlock } from './simulatedBlock.ts';

export interface FileCase {
  readonly name: string;
  readonly areaHa: number;
  readonly pixelM: number;
  readonly seed: number;
  readonly k: number;
}

export interface WrittenCase {
  readonly folder: string;
  readonly block: SimulatedBlock;
  readonly megapixels: number;
}

const ROW_SPACING_M = 2.5;

/** Writes block.geojson, vigour.tif (bands red, near infrared), dem.tif, soil.geojson, ec.csv and samples.csv. */
export function writeCase(folder: string, { areaHa, pixelM, seed, k }: FileCase): WrittenCase {
  const random = seededRandom(seed);
  const block = zonedBlock({ areaHa, cellSizeM: 2, random, k, difficulty: 0.5, edgeM: 5 });
  const text = (name: string, content: string) => writeFileSync(join(folder, name), content);
  text('block.geojson', JSON.stringify({ type: 'FeatureCollection', features: [feature(polygonsFromUtm(block.grid.outlineXY, block.grid.epsg), { name: 'Simulated block' })] }));
  const picture = bandsOf(block, pixelM, random);
  writeFileSync(join(folder, 'vigour.tif'), geoTiffBytes({ ...picture, epsg: block.grid.epsg, noData: 0 }));
  writeFileSync(join(folder, 'dem.tif'), geoTiffBytes({ ...elevationOf(block.grid, random), epsg: block.grid.epsg, noData: -9999 }));
  text('soil.geojson', JSON.stringify({ type: 'FeatureCollection', features: soilAreas(block.grid, random) }));
  text('ec.csv', surveyTable(block));
  text('samples.csv', readingsTable(block, random));
  return { folder, block, megapixels: (picture.width * picture.height) / 1e6 };
}

function feature(coordinates: unknown, properties: Record<string, unknown>) {
  return { type: 'Feature', properties, geometry: { type: 'MultiPolygon', coordinates } };
}

/** Canopy over rows, alleys between them, two levels of every second alley, swaths with a gain of their own, one gap. */
function bandsOf({ grid, vigour }: SimulatedBlock, pixelM: number, random: Random) {
  const width = Math.ceil((grid.cols * grid.cellSizeM) / pixelM);
  const height = Math.ceil((grid.rows * grid.cellSizeM) / pixelM);
  const [red, nir] = [new Uint16Array(width * height), new Uint16Array(width * height)];
  const bearing = Math.PI * random();
  const [cosine, sine] = [Math.cos(bearing), Math.sin(bearing)];
  const gains = Array.from({ length: 4096 }, () => 1 + 0.018 * randomNormal(random));
  const noise = Float32Array.from({ length: 65_536 }, () => 0.01 * randomNormal(random));
  const gap = { x: width * (0.3 + 0.4 * random()), y: height * (0.3 + 0.4 * random()), reach: 0.02 * width };
  for (let row = 0; row < height; row++) {
    for (let col = 0; col < width; col++) {
      const at = row * width + col;
      if (Math.hypot(col - gap.x, row - gap.y) < gap.reach) continue;
      const across = (col * cosine - row * sine) * pixelM;
      const vineRow = Math.floor(across / ROW_SPACING_M);
      const fromRow = Math.abs(across - (vineRow + 0.5) * ROW_SPACING_M);
      const cell = Math.min(grid.rows - 1, Math.floor((row * pixelM) / grid.cellSizeM)) * grid.cols + Math.min(grid.cols - 1, Math.floor((col * pixelM) / grid.cellSizeM));
      const isCanopy = fromRow < 0.45 && !Number.isNaN(vigour[cell]!);
      const index = isCanopy ? vigour[cell]! : vineRow % 2 === 0 ? 0.32 : 0.17;
      const gain = gains[2048 + Math.floor((row * cosine + col * sine) * (pixelM / 20))]!;
      const brightness = isCanopy ? 0.56 : 0.46;
      nir[at] = 10_000 * Math.max(0.004, (gain * brightness * (1 + index)) / 2 + noise[(at * 31) % 65_536]!);
      red[at] = 10_000 * Math.max(0.004, (brightness * (1 - index)) / 2 + 0.5 * noise[(at * 17 + 9) % 65_536]!);
    }
  }
  return { width, height, bands: [red, nir], originX: grid.x0, originY: grid.y0, pixelSize: pixelM };
}

function elevationOf(grid: Grid, random: Random) {
  const size = 5;
  const coarse = { ...grid, cellSizeM: size, cols: Math.ceil((grid.cols * grid.cellSizeM) / size) + 12, rows: Math.ceil((grid.rows * grid.cellSizeM) / size) + 12 };
  const everywhere = { ...coarse, inside: new Uint8Array(coarse.cols * coarse.rows).fill(1) };
  const tilt = planeField(everywhere, random);
  const relief = smoothField(everywhere, 120, random);
  const metres = Float32Array.from(tilt, (value, cell) => 140 + 6 * value + 2 * relief[cell]! + 0.04 * randomNormal(random));
  return { width: coarse.cols, height: coarse.rows, bands: [metres], originX: grid.x0 - 6 * size, originY: grid.y0 + 6 * size, pixelSize: size };
}

/** Four areas that meet at a point inside the block. */
function soilAreas({ x0, y0, cols, rows, cellSizeM, epsg }: Grid, random: Random) {
  const [east, south] = [x0 + cols * cellSizeM + 50, y0 - rows * cellSizeM - 50];
  const middle = [x0 + (0.3 + 0.4 * random()) * cols * cellSizeM, y0 - (0.3 + 0.4 * random()) * rows * cellSizeM] as const;
  const [west, north] = [x0 - 50, y0 + 50];
  return [[west, north], [east, north], [east, south], [west, south]].map(([x, y], at) => {
    const corners = [[x!, y!], [middle[0], y!], [...middle], [x!, middle[1]], [x!, y!]].map(([px, py]) => [...fromUtm([px!, py!], epsg)]);
    return feature([[corners]], { SOIL_ID: `SU0${at + 1}`, AWC_MM: Math.round(80 + 100 * random()) });
  });
}

function surveyTable({ survey, grid }: SimulatedBlock): string {
  const rows = Array.from(survey.value, (value, point) => {
    const [lon, lat] = fromUtm([survey.x[point]!, survey.y[point]!], grid.epsg);
    return `${point + 1},${lat.toFixed(7)},${lon.toFixed(7)},${value.toFixed(2)}`;
  });
  return ['point_id,latitude,longitude,ec_deep_mS_m', ...rows].join('\n');
}

function readingsTable({ grid, truth }: SimulatedBlock, random: Random): string {
  const inside = Array.from(grid.inside.keys()).filter((cell) => grid.inside[cell] === 1);
  const rows = Array.from({ length: 150 }, (_, at) => {
    const cell = inside[Math.floor(random() * inside.length)]!;
    const [x, y] = cellCentre(grid, cell);
    const [lon, lat] = fromUtm([x, y], grid.epsg);
    const brix = 24 - 0.7 * truth[cell]! + randomNormal(random);
    return `${at + 1},2025-09-05,${Math.floor((x - grid.x0) / ROW_SPACING_M)},${Math.floor((grid.y0 - y) / 1.2)},${lat.toFixed(7)},${lon.toFixed(7)},${brix.toFixed(2)}`;
  });
  return ['sample_id,date,row,vine,latitude,longitude,brix', ...rows].join('\n');
}
