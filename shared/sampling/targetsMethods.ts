import type { Random } from '../analysis/random.ts';
import type { VineTable } from '../geo/vines.ts';
import { localPivotal, type Units } from './pivotal.ts';
import { serpentine, systematicPlaces, systematicStart } from './systematic.ts';

/** What a method may look at when it draws `count` of a zone's eligible vines. */
export interface DrawInput {
  readonly table: VineTable;
  /** Eligible vines, ascending indexes into the table. */
  readonly vines: readonly number[];
  /** The same vines as units with positions and equal inclusion probabilities. */
  readonly units: Units;
  readonly count: number;
}

export type DrawMethod = 'pivotal' | 'systematic';

/** Every method returns `count` different units (indexes into `vines`), each with the same chance. */
export const drawMethods: Record<DrawMethod, (input: DrawInput, random: Random) => number[]> = {
  pivotal: ({ units, count }, random) => (count === 0 ? [] : localPivotal(units, random)),
  systematic: ({ table, vines, count }, random) => {
    if (count === 0) return [];
    const list = serpentine(table, vines);
    const unitOf = new Map(vines.map((vine, unit) => [vine, unit]));
    return systematicPlaces(list.length, count, systematicStart(list.length, count, random)).map((place) => unitOf.get(list[place - 1]!)!);
  },
};
