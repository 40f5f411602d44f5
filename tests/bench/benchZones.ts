/** How well zones agree with the truth when layers and number are both advised, on simulated blocks. */

import { adjustedRandIndex } from '../../shared/analysis/agreement.ts';
import { seededRandom } from '../../shared/analysis/random.ts';
import { makeZoning } from '../../shared/analysis/zoning.ts';
import { layersOf } from './judgedPanel.ts';
import { zonedBlock } from './simulatedBlock.ts';
import { wilson } from './benchVerdict.ts';

export interface ZonesRow {
  readonly areaHa: number;
  readonly edgeM: number;
  readonly blocks: number;
  readonly rightNumber: number;
  readonly rightInterval: readonly [number, number];
  readonly withinOne: number;
  readonly agreementMedian: number;
  readonly agreementMean: number;
  /** At the true number of zones: what the choice of the number costs is the difference. */
  readonly agreementAtTrueNumber: number;
  readonly secondsEach: number;
}

/** Two sizes and two widths of passage between zones; 2 to 5 true zones. */
export function* benchZones(perKind: number, firstSeed: number): Generator<ZonesRow> {
  for (const [areaHa, cellSizeM] of [[2, 2], [20, 3]] as const) {
    for (const edgeM of [5, 12]) {
      const start = performance.now();
      const results = Array.from({ length: perKind }, (_, at) => {
        const k = 2 + (at % 4);
        const block = zonedBlock({ areaHa, cellSizeM, random: seededRandom(7 * (firstSeed + at) + edgeM), k, difficulty: 0.5, edgeM });
        const { advisedK, candidates } = makeZoning({ grid: block.grid, layers: layersOf(block), options: { seed: firstSeed + at } });
        const inside = Array.from(block.grid.inside.keys()).filter((cell) => block.grid.inside[cell] === 1);
        const agreement = (number: number) => adjustedRandIndex(inside.map((cell) => block.truth[cell]!), inside.map((cell) => candidates[number - 1]!.labels[cell]!));
        return { k, advisedK, advised: agreement(advisedK), atTrue: agreement(k) };
      });
      const right = results.filter(({ k, advisedK }) => k === advisedK).length;
      yield {
        areaHa,
        edgeM,
        blocks: perKind,
        rightNumber: right / perKind,
        rightInterval: wilson(right, perKind),
        withinOne: results.filter(({ k, advisedK }) => Math.abs(k - advisedK) <= 1).length / perKind,
        agreementMedian: median(results.map(({ advised }) => advised)),
        agreementMean: mean(results.map(({ advised }) => advised)),
        agreementAtTrueNumber: mean(results.map(({ atTrue }) => atTrue)),
        secondsEach: (performance.now() - start) / 1000 / perKind,
      };
    }
  }
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return mean([sorted[Math.floor((sorted.length - 1) / 2)]!, sorted[Math.ceil((sorted.length - 1) / 2)]!]);
}
