import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { BagLine, NewBag } from '../../shared/contracts/bags.ts';
import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { newId } from '../lib/newId.ts';
import { addBag, bagsOfRound } from '../offline/bagBox.ts';
import { deviceId } from '../offline/deviceId.ts';
import { orNothing, type KeptBag } from '../offline/fieldDatabase.ts';

/** Where a label is bound already, as far as this phone knows. */
export interface LabelUse {
  readonly row: string | null;
  /** Where its vine stands, given where there are no rows. */
  readonly place?: readonly [lon: number, lat: number] | undefined;
  readonly person: string | null;
  readonly at: string | null;
  /** A vine of the bag that carries it, where this phone closed it. */
  readonly vine: { readonly rowId: string; readonly ordinal: number } | null;
}

/** Bags as they are closed in the row. */
export const useFieldBagsStore = defineStore('fieldBags', () => {
  const bags = shallowRef<readonly KeptBag[]>([]);
  /** Labels of the round that other phones had bound when the server was last asked. */
  const others = shallowRef<readonly BagLine[]>([]);

  async function look(roundId: string): Promise<void> {
    bags.value = await orNothing(bagsOfRound(roundId), []);
  }

  async function load(estateId: string, roundId: string): Promise<void> {
    await look(roundId);
    try {
      others.value = (await http.get<{ items: BagLine[] }>(`/api/estates/${estateId}/bags`, { query: { round: roundId } })).items;
    } catch (error) {
      // Without signal the phone's own bags have to do; what another phone bound shows when both have sent.
      if (!(error instanceof HttpProblem)) throw error;
    }
  }

  function usedBy(code: string): LabelUse | null {
    const other = others.value.find((line) => line.code === code && line.place !== 'void' && line.closedAt !== null);
    return other ? { row: other.rowLabel, place: other.vinePlace, person: other.holder, at: other.closedAt, vine: null } : null;
  }

  /** Keeps a closed bag on the phone, to be sent with the rest. Answers where the label is bound already, if it is. */
  async function close(owner: { estateId: string; personId: string; roundId: string }, closed: Pick<NewBag, 'code' | 'blockId' | 'vines' | 'berries' | 'sunSide' | 'shadeSide' | 'wet' | 'rotPercent' | 'note'> & { zone: number }): Promise<LabelUse | null> {
    const known = usedBy(closed.code);
    if (known && !bags.value.some(({ code }) => code === closed.code)) return known;
    const { zone, ...facts } = closed;
    const [id, at] = [newId(), new Date().toISOString()];
    const bag: NewBag = { ...facts, id, state: 'closed', roundId: owner.roundId, zoneId: null, closedAt: at, deviceTime: null, deviceId: deviceId() };
    const holder = await addBag({ ...owner, id, zone, code: closed.code, bag, at, received: 0, outcome: null });
    await look(owner.roundId);
    return holder ? { row: null, person: null, at: holder.at, vine: holder.bag.vines[0] ?? null } : null;
  }

  return { bags, load, look, close };
});
