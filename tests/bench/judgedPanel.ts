/** Simulated blocks of one kind with what the evidence stage says of each. */

import { adviseLayers, layersToCompare } from '../../shared/analysis/layerAdvice.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import type { Verdict } from '../../shared/analysis/verdict.ts';
import { adviseZoneCount } from '../../shared/analysis/zoneCount.ts';
import { evidenceTask, structuresOf, weighEvidence } from '../../shared/analysis/zoningEvidence.ts';
import { decideWeights, prepareLayers } from '../../shared/analysis/zoningPrepare.ts';
import { defaultZoningOptions } from '../../shared/analysis/zoningOptions.ts';
import type { ZoningLayer } from '../../shared/analysis/zoningTypes.ts';
import { noiseBlock, slopeBlock, zonedBlock, type NoiseKind, type SimulatedBlock, type SlopeKind } from './simulatedBlock.ts';

export type PanelKind = NoiseKind | SlopeKind | 'zones' | 'straight';

export interface PanelOptions {
  readonly kind: PanelKind;
  readonly areaHa: number;
  readonly cellSizeM: number;
  readonly count: number;
  readonly firstSeed: number;
  /** Width over which zones pass into each other; zones only. */
  readonly edgeM?: number;
  /** Measured layers; two where nothing is said, the vigour alone where it is one. */
  readonly layerCount?: 1 | 2 | 3;
}

export interface JudgedBlock {
  readonly verdict: Verdict;
  readonly advisedK: number;
  readonly trueK: number;
}

export function judgedPanel(options: PanelOptions): JudgedBlock[] {
  return Array.from({ length: options.count }, (_, at) => {
    const block = blockOf(options, at);
    const { verdict, curve, layerCount, standingOut } = weighEvidence(evidenceTask({ ...evidenceOf(block, options.layerCount ?? 2), seed: options.firstSeed + at }));
    const count = adviseZoneCount({ curve, layerCount, workable: [2, 3, 4, 5, 6] });
    return { verdict: standingOut !== null && verdict.verdict === 'one' ? 'test' : verdict.verdict, advisedK: count.best, trueK: block.k };
  });
}

/** The layers of a simulated block as a zoning takes them; vigour is not smoothed yet. */
export function layersOf({ vigour, conductivity }: SimulatedBlock): ZoningLayer[] {
  return [
    { id: 'vigour', type: 'vigour', role: 'evidence', kind: 'number', cells: vigour, weight: null },
    { id: 'conductivity', type: 'conductivity', role: 'evidence', kind: 'number', cells: conductivity, weight: null },
  ];
}

function blockOf({ kind, areaHa, cellSizeM, firstSeed, edgeM = 6 }: PanelOptions, at: number): SimulatedBlock {
  const options = { areaHa, cellSizeM, random: seededRandom(1000 * (firstSeed + at) + kind.length + kind.charCodeAt(0)) };
  if (kind === 'zones') return zonedBlock({ ...options, k: 2 + (at % 4), difficulty: 0.5, edgeM });
  // Two or three, so that on two hectares a strip is wider than a sensor's swath.
  if (kind === 'straight') return zonedBlock({ ...options, k: 2 + (at % 2), difficulty: 0.5, edgeM: 1, isStraight: true });
  return kind === 'white' || kind === 'short' || kind === 'stripes' ? noiseBlock(kind, options) : slopeBlock(kind, options);
}

/** As a zoning looks at the layers when all weights are left to the advice. */
function evidenceOf(block: SimulatedBlock, layerCount: 1 | 2 | 3) {
  const { grid, areaM2 } = block;
  const third: ZoningLayer[] = layerCount === 3 ? [{ id: 'third', type: 'yield', role: 'evidence', kind: 'number', cells: block.third(), weight: null }] : [];
  const { layers } = prepareLayers(grid, [...layersOf(block).slice(0, layerCount), ...third], defaultZoningOptions);
  const advisable = layers.map((layer) => ({ ...layer, cells: layer.smoothed }));
  const advised = adviseLayers(advisable, structuresOf(grid, layersToCompare(advisable), areaM2));
  const scattered = new Set(advised.filter(({ code }) => code === 'scattered').map(({ id }) => id));
  return { grid, areaM2, layers, weights: decideWeights(layers, advised), scattered };
}
