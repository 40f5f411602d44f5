import type { DayStop } from '../../../shared/contracts/rounds.ts';
import { Block } from '../../models/Block.ts';
import { Round } from '../../models/Round.ts';
import { RoundPerson } from '../../models/RoundPerson.ts';
import type { RoundWalk } from './roundWalk.ts';

/** All that a person walks on a day, in the order it was sent in; rounds sent by themselves come after, as they were made. */
export async function dayStops(estateId: string, of: { personId: string; onDate: string }): Promise<DayStop[]> {
  const mine = await RoundPerson.query().where({ estateId, personId: of.personId }).select('roundId');
  const rounds = await Round.query().where({ estateId, onDate: of.onDate }).whereNot({ state: 'called off' }).findByIds(mine.map(({ roundId }) => roundId)).orderByRaw('day_place nulls last').orderBy('createdAt');
  const blocks = await Block.query().where({ estateId }).findByIds(rounds.map(({ blockId }) => blockId)).select('id', 'name');
  return rounds.map(({ id, blockId, gate, dayPlace, wayS, walk }, i) => {
    const share = (walk as RoundWalk).shares.find(({ personId }) => personId === of.personId);
    // A way leads from the block before: where that one was called off, it is not known.
    const before = rounds[i - 1]?.dayPlace ?? null;
    return {
      roundId: id, block: blocks.find((block) => block.id === blockId)?.name ?? '', gate, vines: share?.stops.length ?? 0, place: dayPlace,
      wayS: dayPlace !== null && before === dayPlace - 1 ? wayS : null, workS: share ? share.walkingS + share.serviceS : 0,
    };
  });
}
