import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { z } from 'zod';
import type { lotChange, LotsBoard, LotView, newLot, newTank } from '../../shared/contracts/lots.ts';
import { http } from '../lib/http.ts';

export interface LotPartChange {
  readonly zoneId: string;
  /** Null for the whole zone. */
  readonly rowIds: readonly string[] | null;
}

/** Pick lots of one scenario with what is free of each zone, and the tanks. Every write reads the board again: figures of all lots may move. */
export const useLotsStore = defineStore('lots', () => {
  const board = shallowRef<LotsBoard | null>(null);
  let estate = '';
  const base = () => `/api/estates/${estate}`;

  async function load(estateId: string, scenarioId: string | null = null): Promise<void> {
    estate = estateId;
    board.value = await http.get<LotsBoard>(`${base()}/lots`, { query: { scenario: scenarioId } });
  }

  const again = () => load(estate, board.value?.scenarioId ?? null);

  async function create(lot: z.input<typeof newLot>): Promise<string> {
    const { id } = await http.post<{ id: string }>(`${base()}/lots`, { ...lot, scenarioId: board.value?.scenarioId ?? null });
    await again();
    return id;
  }

  async function change(lot: LotView, facts: z.infer<typeof lotChange>): Promise<void> {
    await http.patch(`${base()}/lots/${lot.id}`, facts, { ifMatch: lot.version });
    await again();
  }

  async function setParts(lot: LotView, parts: readonly LotPartChange[]): Promise<void> {
    await http.put(`${base()}/lots/${lot.id}/parts`, { parts }, { ifMatch: lot.version });
    await again();
  }

  async function confirm(lot: LotView): Promise<void> {
    await http.post(`${base()}/lots/${lot.id}/confirm`, undefined, { ifMatch: lot.version });
    await again();
  }

  async function remove(lot: LotView): Promise<void> {
    await http.delete(`${base()}/lots/${lot.id}`, { ifMatch: lot.version });
    await again();
  }

  async function copyScenario(name: string): Promise<void> {
    const { id } = await http.post<{ id: string }>(`${base()}/scenarios`, { name, copyOf: board.value!.scenarioId });
    await load(estate, id);
  }

  async function addTank(tank: z.input<typeof newTank>): Promise<void> {
    await http.post(`${base()}/tanks`, tank);
    await again();
  }

  async function retireTank(tankId: string): Promise<void> {
    await http.delete(`${base()}/tanks/${tankId}`);
    await again();
  }

  return { board, load, create, change, setParts, confirm, remove, copyScenario, addTank, retireTank };
});
