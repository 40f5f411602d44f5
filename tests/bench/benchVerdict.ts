/** How often the verdict is right: many simulated blocks of noise, slopes and zones, of 2 and 20 ha, with 95 % intervals. */

import { criticalZ } from '../../shared/sampling/quantiles.ts';
import { judgedPanel, type PanelKind } from './judgedPanel.ts';
import { noiseKinds, slopeKinds } from './simulatedBlock.ts';

export interface VerdictRow {
  readonly kind: PanelKind;
  readonly areaHa: number;
  readonly layers: 1 | 2 | 3;
  readonly blocks: number;
  readonly one: number;
  readonly test: number;
  readonly several: number;
  /** Share with the verdict wanted of this kind, and its Wilson interval (Wilson 1927). */
  readonly wanted: string;
  readonly share: number;
  readonly interval: readonly [number, number];
}

/** What the verdict should say of each kind. */
const wantedOf = (kind: PanelKind) => (kind === 'zones' || kind === 'straight' ? 'not one' : noiseKinds.some((noise) => noise === kind) ? 'one' : 'test');

/** `perKind` blocks of each kind and size, with one to three measured layers. */
export function* benchVerdict(perKind: number, firstSeed: number, layers: 1 | 2 | 3): Generator<VerdictRow> {
  for (const [areaHa, cellSizeM] of [[2, 2], [20, 3]] as const) {
    for (const kind of [...noiseKinds, ...slopeKinds, 'zones' as const, 'straight' as const]) {
      const verdicts = judgedPanel({ kind, areaHa, cellSizeM, count: perKind, firstSeed, layerCount: layers }).map(({ verdict }) => verdict);
      const count = (wanted: string) => verdicts.filter((verdict) => verdict === wanted).length;
      const wanted = wantedOf(kind);
      const right = wanted === 'not one' ? perKind - count('one') : count(wanted);
      yield { kind, areaHa, layers, blocks: perKind, one: count('one'), test: count('test'), several: count('several'), wanted, share: right / perKind, interval: wilson(right, perKind) };
    }
  }
}

export function wilson(hits: number, count: number): [number, number] {
  const z = criticalZ(0.95);
  const share = hits / count;
  const middle = (share + (z * z) / (2 * count)) / (1 + (z * z) / count);
  const half = (z / (1 + (z * z) / count)) * Math.sqrt((share * (1 - share)) / count + (z * z) / (4 * count * count));
  return [Math.max(0, middle - half), Math.min(1, middle + half)];
}
