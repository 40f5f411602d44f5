/**
 * Blocks made up with a known truth: an irregular outline, a vigour layer as a camera would see it and a conductivity layer
 * as a survey on rows would give it. Three sorts: noise (nothing there), slope (a smooth change, no zones), zones.
 */

import { gridOfOutline, type Cells, type Grid } from '../../shared/analysis/grid.ts';
import { randomNormal, type Random } from '../../shared/analysis/random.ts';
import { inverseDistance, type ValuedPoints } from '../../shared/analysis/resamplePoints.ts';
import { smooth } from '../../shared/analysis/smooth.ts';
import type { RingXY, XY } from '../../shared/geo/coordinates.ts';
import { added, planeField, smoothField, stripeField, whiteField } from './simulatedFields.ts';

export type NoiseKind = 'white' | 'short' | 'stripes';
export type SlopeKind = 'plane' | 'long' | 'medium';
export const noiseKinds: readonly NoiseKind[] = ['white', 'short', 'stripes'];
export const slopeKinds: readonly SlopeKind[] = ['plane', 'long', 'medium'];

export interface SimulatedBlock {
  readonly grid: Grid;
  readonly areaM2: number;
  readonly vigour: Cells;
  readonly conductivity: Cells;
  /** The readings that conductivity is interpolated from. */
  readonly survey: ValuedPoints;
  /** True zone 1…k per cell, 0 outside; all 1 for noise and slopes. */
  readonly truth: Uint8Array;
  readonly k: number;
  /** A third layer measured on the vines by something else, as a yield monitor gives it; drawn when asked for, so that the others stay the same. */
  readonly third: () => Cells;
}

export interface BlockOptions {
  readonly areaHa: number;
  readonly cellSizeM: number;
  readonly random: Random;
}

/** No structure at a workable scale in either layer. */
export function noiseBlock(kind: NoiseKind, options: BlockOptions): SimulatedBlock {
  const { random } = options;
  const grid = simulatedGrid(options);
  const white = whiteField(grid, random);
  const seenIn: Record<NoiseKind, (white: Float64Array) => Float64Array> = {
    white: (white) => white,
    short: (white) => added(smoothField(grid, between(random, 3, 8), random), white, between(random, 0.2, 1)),
    stripes: (white) => added(white, stripeField(grid, between(random, 12, 30), random), between(random, 0.5, 2)),
  };
  const soil = kind === 'short' ? smoothField(grid, between(random, 3, 10), random) : new Float64Array(white.length);
  return finished(grid, options, { vigour: seenIn[kind](white), soil, soilNoise: between(random, 0.2, 1), third: () => seenIn[kind](whiteField(grid, random)) });
}

/** A smooth change over the block, the same in both layers or one of its own in each, with 30 to 100 % noise. */
export function slopeBlock(kind: SlopeKind, options: BlockOptions): SimulatedBlock {
  const { random, areaHa } = options;
  const grid = simulatedGrid(options);
  const widthM = Math.sqrt(areaHa * 10_000);
  const fieldOf: Record<SlopeKind, () => Float64Array> = {
    plane: () => planeField(grid, random),
    long: () => smoothField(grid, widthM / 2.2, random),
    medium: () => smoothField(grid, widthM / 3.2, random),
  };
  const first = fieldOf[kind]();
  const soil = random() < 0.5 ? first.map((value) => -value) : fieldOf[kind]();
  return finished(grid, options, { vigour: added(first, whiteField(grid, random), between(random, 0.3, 1)), soil, soilNoise: between(random, 0.3, 1), third: () => added(random() < 0.5 ? first : fieldOf[kind](), whiteField(grid, random), between(random, 0.3, 1)) });
}

export interface ZonedOptions extends BlockOptions {
  readonly k: number;
  /** Noise against the step between neighbouring zones; 1 is hard. */
  readonly difficulty: number;
  /** Width over which one zone passes into the next. */
  readonly edgeM: number;
  /** Parallel strips with straight borders instead, as where a vineyard was planted in parts along its rows. */
  readonly isStraight?: boolean;
}

/** k zones that follow a smooth field or bodies of soil around seed points, with their own levels in both layers. */
export function zonedBlock(options: ZonedOptions): SimulatedBlock {
  const { random, k, difficulty, edgeM } = options;
  const grid = simulatedGrid(options);
  const truth = options.isStraight ? stripsOf(grid, options) : random() < 0.6 ? bandsOf(grid, options) : bodiesOf(grid, options);
  const order = shuffledLevels(k, random);
  const level = (levels: number[]) => smoothCells(grid, Float64Array.from(truth, (zone) => levels[Math.max(1, zone) - 1]!), edgeM / 2);
  const steps = Array.from({ length: k }, (_, zone) => (zone - (k - 1) / 2) * (4.5 / k) + 0.15 * randomNormal(random));
  const noise = 0.25 + 0.55 * difficulty;
  const vigour = added(added(level(steps), smoothField(grid, 30, random), 0.7 * noise), smoothField(grid, 9, random), 0.5 * noise);
  const soil = added(added(level(order.map((at) => steps[at]!)), smoothField(grid, 35, random), 0.7 * noise), smoothField(grid, 11, random), 0.4 * noise);
  const another = () => {
    const again = shuffledLevels(k, random);
    const field = added(added(level(again.map((at) => steps[at]!)), smoothField(grid, 32, random), 0.7 * noise), smoothField(grid, 10, random), 0.5 * noise);
    return added(field, whiteField(grid, random), 0.6 * noise);
  };
  return { ...finished(grid, options, { vigour: added(vigour, whiteField(grid, random), 0.6 * noise), soil, soilNoise: 0.3 * noise, third: another }), truth, k };
}

interface Raw {
  readonly vigour: Float64Array;
  readonly soil: Float64Array;
  readonly soilNoise: number;
  readonly third: () => Float64Array;
}

/** Vigour as a camera gives it, conductivity measured along rows and interpolated. */
function finished(grid: Grid, { areaHa, random }: BlockOptions, raw: Raw): SimulatedBlock {
  const cellsOf = (field: Float64Array, level: number, spread: number) => Float32Array.from(field, (value, cell) => (grid.share[cell]! > 0 ? level + spread * value : NaN));
  const vigour = cellsOf(raw.vigour, 0.65, 0.06);
  const survey = surveyAlongRows(grid, raw, random);
  return { grid, areaM2: areaHa * 10_000, vigour, conductivity: inverseDistance(grid, survey), survey, truth: Uint8Array.from(grid.inside), k: 1, third: () => cellsOf(smoothCells(grid, raw.third(), 3), 8, 1.5) };
}

function surveyAlongRows(grid: Grid, { soil, soilNoise }: Raw, random: Random): ValuedPoints {
  const angle = Math.PI * random();
  const [x, y, value]: [number[], number[], number[]] = [[], [], []];
  const reach = Math.hypot(grid.cols, grid.rows) * grid.cellSizeM;
  const centre = [grid.x0 + (grid.cols * grid.cellSizeM) / 2, grid.y0 - (grid.rows * grid.cellSizeM) / 2] as const;
  for (let across = -reach / 2; across < reach / 2; across += 6) {
    for (let along = -reach / 2; along < reach / 2; along += 3) {
      const px = centre[0] + across * Math.cos(angle) - along * Math.sin(angle) + 0.3 * randomNormal(random);
      const py = centre[1] + across * Math.sin(angle) + along * Math.cos(angle) + 0.3 * randomNormal(random);
      const cell = Math.floor((grid.y0 - py) / grid.cellSizeM) * grid.cols + Math.floor((px - grid.x0) / grid.cellSizeM);
      if (grid.inside[cell] !== 1) continue;
      x.push(px);
      y.push(py);
      value.push(40 + 8 * (soil[cell]! + soilNoise * randomNormal(random)));
    }
  }
  return { x: Float64Array.from(x), y: Float64Array.from(y), value: Float64Array.from(value) };
}

/** An outline of six to nine corners, longer than wide by up to two thirds, turned at random. */
function simulatedGrid({ areaHa, cellSizeM, random }: BlockOptions): Grid {
  const stretch = between(random, 1, 1.7);
  const turn = Math.PI * random();
  const corners = 6 + Math.floor(4 * random());
  const shape: XY[] = Array.from({ length: corners }, (_, corner) => {
    const angle = (2 * Math.PI * (corner + 0.5 * random())) / corners;
    const radius = between(random, 0.85, 1.25);
    const [u, v] = [radius * stretch * Math.cos(angle), radius * Math.sin(angle)];
    return [u * Math.cos(turn) - v * Math.sin(turn), u * Math.sin(turn) + v * Math.cos(turn)] as XY;
  });
  const scale = Math.sqrt((areaHa * 10_000) / areaOf(shape));
  const ring = shape.map(([x, y]): XY => [500_000 + scale * x, 5_000_000 + scale * y]);
  return gridOfOutline([[[...ring, ring[0]!] as RingXY]], 32631, cellSizeM);
}

function areaOf(corners: readonly XY[]): number {
  return Math.abs(corners.reduce((sum, [x, y], i) => sum + x * corners[(i + 1) % corners.length]![1] - corners[(i + 1) % corners.length]![0] * y, 0)) / 2;
}

/** Zones as levels of a smooth field, each with at least half of an equal share. */
function bandsOf(grid: Grid, { areaHa, k, random }: ZonedOptions): Uint8Array {
  const field = smoothField(grid, Math.sqrt(areaHa * 10_000) / 2.2, random);
  const sorted = field.filter((_, cell) => grid.inside[cell] === 1).sort();
  const shares = Array.from({ length: k }, () => between(random, 0.6, 1.4));
  const total = shares.reduce((sum, share) => sum + share, 0);
  let below = 0;
  const limits = shares.slice(0, -1).map((share) => sorted[Math.floor(((below += share) / total) * (sorted.length - 1))]!);
  return Uint8Array.from(field, (value, cell) => (grid.inside[cell] === 1 ? 1 + limits.filter((limit) => value > limit).length : 0));
}

/** Zones as parallel strips of about the same area, turned at random. */
function stripsOf(grid: Grid, { k, random }: ZonedOptions): Uint8Array {
  const angle = Math.PI * random();
  const across = Float64Array.from(grid.inside, (_, cell) => (cell % grid.cols) * Math.cos(angle) + Math.floor(cell / grid.cols) * Math.sin(angle));
  const sorted = across.filter((_, cell) => grid.inside[cell] === 1).sort();
  return Uint8Array.from(across, (value, cell) => (grid.inside[cell] === 1 ? Math.min(k, 1 + Math.floor((k * lowerBound(sorted, value)) / sorted.length)) : 0));
}

/** Zones as the ground nearest to seed points, two points a zone, with wavy borders. */
function bodiesOf(grid: Grid, { areaHa, k, random }: ZonedOptions): Uint8Array {
  const widthM = Math.sqrt(areaHa * 10_000);
  const inside = Array.from(grid.inside.keys()).filter((cell) => grid.inside[cell] === 1);
  const seeds = Array.from({ length: 2 * k }, () => inside[Math.floor(random() * inside.length)]!);
  const waves = [smoothField(grid, widthM / 4, random), smoothField(grid, widthM / 4, random)] as const;
  const wave = widthM / 15 / grid.cellSizeM;
  return Uint8Array.from(grid.inside, (isInside, cell) => {
    if (isInside === 0) return 0;
    const col = (cell % grid.cols) + wave * waves[0][cell]!;
    const row = Math.floor(cell / grid.cols) + wave * waves[1][cell]!;
    const squares = seeds.map((seed) => ((seed % grid.cols) - col) ** 2 + (Math.floor(seed / grid.cols) - row) ** 2);
    return 1 + (squares.indexOf(Math.min(...squares)) % k);
  });
}

function lowerBound(sorted: Float64Array, value: number): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (sorted[middle]! < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

function shuffledLevels(k: number, random: Random): number[] {
  const keys = Array.from({ length: k }, () => random());
  return Array.from(keys.keys()).sort((a, b) => keys[a]! - keys[b]!);
}

function smoothCells(grid: Grid, field: Float64Array, sigmaM: number): Float64Array {
  const everywhere = { ...grid, inside: new Uint8Array(field.length).fill(1) };
  return Float64Array.from(smooth(everywhere, Float32Array.from(field), { sigmaM }));
}

function between(random: Random, low: number, high: number): number {
  return low + (high - low) * random();
}
