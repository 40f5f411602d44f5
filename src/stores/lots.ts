import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { z } from 'zod';
import type { BrixMethod, CapacityView, dayCapacity, DecisionView, lotChange, LotsBoard, LotView, newLot, newTank, tankChange } from '../../shared/contracts/lots.ts';
import type { newSuggestion } from '../../shared/contracts/suggestions.ts';
import { http } from '../lib/http.ts';
import { inOrder } from '../lib/inOrder.ts';

export interface LotPartChange {
  readonly zoneId: string;
  /** Null for the whole zone. */
  readonly rowIds: readonly string[] | null;
}

/** Pick lots of one scenario with what is free of each zone, and the tanks. Every write reads the board again: figures of all lots may move. */
export const useLotsStore = defineStore('lots', () => {
  const board = shallowRef<LotsBoard | null>(null);
  /** Boards of other scenarios, for laying them side by side. */
  const compared = shallowRef<readonly LotsBoard[]>([]);
  const capacities = shallowRef<readonly CapacityView[]>([]);
  const decisions = shallowRef<readonly DecisionView[]>([]);
  let estate = '';
  const [newestBoard, newestDecisions, newestCapacities] = [inOrder(), inOrder(), inOrder()];
  const base = () => `/api/estates/${estate}`;

  /** `knownOn`: as all of it stood on that day; empty for now. */
  async function load(estateId: string, scenarioId: string | null = null, knownOn = ''): Promise<void> {
    estate = estateId;
    const query = { scenario: scenarioId, known: knownOn === '' ? null : knownOn };
    await newestBoard(() => http.get<LotsBoard>(`${base()}/lots`, { query }), (answer) => (board.value = answer));
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

  /** Makes a confirmed lot a draft again; its notice is void from then on. */
  async function reopen(lot: LotView): Promise<void> {
    await http.post(`${base()}/lots/${lot.id}/reopen`, undefined, { ifMatch: lot.version });
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

  async function move(zoneId: string, from: LotView, to: LotView): Promise<void> {
    await http.post(`${base()}/lot-moves`, { zoneId, fromLotId: from.id, fromVersion: from.version, toLotId: to.id, toVersion: to.version });
    await again();
  }

  /** Asks for a proposal and shows it; what is in force stays as it is. */
  async function suggest(asked: z.input<typeof newSuggestion>): Promise<void> {
    const { id } = await http.post<{ id: string }>(`${base()}/lot-suggestions`, asked);
    await load(estate, id);
  }

  async function applyScenario(scenarioId: string): Promise<void> {
    await http.post(`${base()}/scenarios/${scenarioId}/apply`);
    await load(estate);
  }

  async function removeScenario(scenarioId: string): Promise<void> {
    await http.delete(`${base()}/scenarios/${scenarioId}`);
    compared.value = compared.value.filter((one) => one.scenarioId !== scenarioId);
    await load(estate);
  }

  async function compare(scenarioIds: readonly string[]): Promise<void> {
    compared.value = await Promise.all(scenarioIds.map((scenario) => http.get<LotsBoard>(`${base()}/lots`, { query: { scenario } })));
  }

  async function loadCapacities(estateId: string, knownOn = ''): Promise<void> {
    const query = { known: knownOn === '' ? null : knownOn };
    await newestCapacities(() => http.get<{ items: CapacityView[] }>(`/api/estates/${estateId}/day-capacities`, { query }), ({ items }) => (capacities.value = items));
  }

  async function setCapacity(estateId: string, capacity: z.input<typeof dayCapacity>): Promise<void> {
    await http.put(`/api/estates/${estateId}/day-capacities`, capacity);
    await loadCapacities(estateId);
  }

  async function chooseAlcohol(method: BrixMethod): Promise<void> {
    await http.put(`${base()}/alcohol-method`, { method });
    await again();
  }

  async function loadDecisions(lotId: string): Promise<void> {
    await newestDecisions(() => http.get<{ items: DecisionView[] }>(`${base()}/lots/${lotId}/decisions`), ({ items }) => (decisions.value = items));
  }

  async function addTank(tank: z.input<typeof newTank>): Promise<void> {
    await http.post(`${base()}/tanks`, tank);
    await again();
  }

  async function changeTank(tankId: string, change: z.input<typeof tankChange>): Promise<void> {
    await http.patch(`${base()}/tanks/${tankId}`, change);
    await again();
  }

  async function retireTank(tankId: string): Promise<void> {
    await http.delete(`${base()}/tanks/${tankId}`);
    await again();
  }

  return { board, compared, capacities, decisions, load, create, change, setParts, move, confirm, reopen, remove, copyScenario, suggest, applyScenario, removeScenario, compare, loadCapacities, setCapacity, chooseAlcohol, loadDecisions, addTank, changeTank, retireTank };
});
