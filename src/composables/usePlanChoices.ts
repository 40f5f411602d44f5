import type { Ref } from 'vue';
import type { PlanBasis, PlanChoices, PlannedMeasureChoice } from '../../shared/contracts/plans.ts';
import { joinPools, membersOf, partPool } from '../../shared/sampling/pooledZones.ts';
import type { ImpracticalOption } from '../../shared/sampling/impractical.ts';

export interface PlanEdits {
  toggle: (code: string) => void;
  adjust: (code: string, facts: Partial<PlannedMeasureChoice>) => void;
  /** Null goes back to the spread that was found. */
  setSpread: (code: string, zone: number, spread: number | null) => void;
  /** All margins by one factor, so that they keep the proportions that were asked for. */
  scaleMargins: (factor: number) => void;
  takeAdvice: (option: ImpracticalOption) => void;
  /** Two zones, or pools of zones, sampled as one; by their numbers in the plan. */
  pool: (one: number, other: number) => void;
  /** Zones of a pool on their own again. */
  part: (zone: number) => void;
  set: (facts: Partial<PlanChoices>) => void;
}

/** What can be done to the choices of a plan; each puts new choices in place of the old. */
export function usePlanChoices(basis: Ref<PlanBasis | null>, choices: Ref<PlanChoices>): PlanEdits {
  const set = (facts: Partial<PlanChoices>) => (choices.value = { ...choices.value, ...facts });
  const measures = (change: (choice: PlannedMeasureChoice) => PlannedMeasureChoice) => set({ measures: choices.value.measures.map(change) });
  const adjust = (code: string, facts: Partial<PlannedMeasureChoice>) => measures((choice) => (choice.code === code ? { ...choice, ...facts } : choice));
  const marginOf = ({ code, margin }: PlannedMeasureChoice) => margin ?? basis.value!.measures.find((measure) => measure.code === code)!.margin;

  function toggle(code: string): void {
    const rest = choices.value.measures.filter((choice) => choice.code !== code);
    set({ measures: rest.length === choices.value.measures.length ? [...rest, { code }] : rest });
  }
  function setSpread(code: string, zone: number, spread: number | null): void {
    const typed = { ...choices.value.measures.find((choice) => choice.code === code)?.spreads };
    if (spread === null) delete typed[String(zone)];
    else typed[String(zone)] = spread;
    adjust(code, { spreads: Object.keys(typed).length > 0 ? typed : undefined });
  }
  const scaleMargins = (factor: number) => measures((choice) => ({ ...choice, margin: marginOf(choice) * factor }));
  /** A spread typed for a zone is not that of its pool, nor the other way round. */
  function pools(list: number[][], touched: readonly number[]): void {
    const forget = (choice: PlannedMeasureChoice): PlannedMeasureChoice => {
      const kept = Object.entries(choice.spreads ?? {}).filter(([zone]) => !touched.includes(Number(zone)));
      return { ...choice, spreads: kept.length > 0 ? Object.fromEntries(kept) : undefined };
    };
    set({ pools: list, measures: choices.value.measures.map((choice) => (choice.spreads ? forget(choice) : choice)) });
  }
  const pool = (one: number, other: number) => pools(joinPools(choices.value.pools, one, other), [...membersOf(choices.value.pools, one), ...membersOf(choices.value.pools, other)]);
  const part = (zone: number) => pools(partPool(choices.value.pools, zone), membersOf(choices.value.pools, zone));
  function takeAdvice(option: ImpracticalOption): void {
    if (option.kind === 'widerMargin') scaleMargins(option.scale);
    if (option.kind === 'lowerConfidence') measures((choice) => ({ ...choice, confidence: option.confidence as NonNullable<typeof choice.confidence> }));
    if (option.kind === 'poolZones') pool(Number(option.zones[0]), Number(option.zones[1]));
  }
  return { toggle, adjust, setSpread, scaleMargins, takeAdvice, pool, part, set };
}
