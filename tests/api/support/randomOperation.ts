import { randomIndex } from '../../../shared/analysis/random.ts';
import type { ZoneOperation } from '../../../shared/contracts/zonings.ts';
import type { PlateauBlock } from './makePlateauBlock.ts';
import { lonLatAt } from './shapes.ts';

/** One act of the manager's hand on the block, of each kind as often as of another; many make no sense for the zones that are there. */
export function randomOperation({ ground }: PlateauBlock, random: () => number): ZoneOperation {
  const zone = () => 1 + randomIndex(random, 4);
  const point = () => lonLatAt(160 * random(), 100 * random());
  const row = () => ground.stored[randomIndex(random, ground.stored.length)]!.id;
  const [a, b, c] = [point(), point(), point()];
  const choices: ZoneOperation[] = [
    { kind: 'merge', zones: [zone()], into: zone() },
    { kind: 'split', zone: zone(), line: { type: 'LineString', coordinates: [a, b, c] } },
    { kind: 'splitAlongRow', zone: zone(), rowId: row() },
    { kind: 'giveRows', toZone: zone(), rows: [{ rowId: row(), from: null, to: null }, { rowId: row(), from: 3, to: 40 }] },
    { kind: 'giveArea', toZone: zone(), area: { type: 'Polygon', coordinates: [[a, b, c, a]] } },
    { kind: 'renumber', numbers: [{ from: zone(), to: 7 }] },
    { kind: 'rename', zone: zone(), name: random() < 0.5 ? 'Côteau' : null },
    { kind: 'recolour', zone: zone(), colour: random() < 0.5 ? '#56B4E9' : null },
    { kind: 'snap', mode: random() < 0.5 ? 'wholeRow' : 'partRow', shortestRunM: 15 },
    { kind: 'clean', smallestPatchHa: 0.03, narrowestRows: 3 },
  ];
  return choices[randomIndex(random, choices.length)]!;
}
