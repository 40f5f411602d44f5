import type { Ref } from 'vue';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { PlanChoices, PlannedMeasureChoice } from '../../shared/contracts/planChoices.ts';
import { choicesJoined, choicesParted } from '../../shared/sampling/pooledZones.ts';
import type { ImpracticalOption } from '../../shared/sampling/impractical.ts';

export interface PlanEdits {
  toggle: (code: string) => void;
  adjust: (code: string, facts: Partial<PlannedMeasureChoice>) => void;
  /** Null goes back to the spread, or the mean, that was found. */
  setTyped: (what: 'spreads' | 'means', code: string, zone: number, value: number | null) => void;
  /** Seconds more at each vine of a zone; 0 or null for none. */
  setZoneSeconds: (zone: number, seconds: number | null) => void;
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
  const measureOf = (code: string) => basis.value!.measures.find((measure) => measure.code === code)!;
  const marginOf = ({ code, margin }: PlannedMeasureChoice) => margin ?? measureOf(code).margin;
  /** A measure that asks for less already stays as it is. */
  const noSurerThan = (level: number, choice: PlannedMeasureChoice): PlannedMeasureChoice => ((choice.confidence ?? measureOf(choice.code).confidence) <= level ? choice : { ...choice, confidence: level as NonNullable<typeof choice.confidence> });

  function toggle(code: string): void {
    const rest = choices.value.measures.filter((choice) => choice.code !== code);
    set({ measures: rest.length === choices.value.measures.length ? [...rest, { code }] : rest });
  }
  function setTyped(what: 'spreads' | 'means', code: string, zone: number, value: number | null): void {
    const typed = { ...choices.value.measures.find((choice) => choice.code === code)?.[what] };
    if (value === null) delete typed[String(zone)];
    else typed[String(zone)] = value;
    adjust(code, { [what]: Object.keys(typed).length > 0 ? typed : undefined });
  }
  function setZoneSeconds(zone: number, seconds: number | null): void {
    const rest = Object.fromEntries(Object.entries(choices.value.zoneSeconds).filter(([number]) => number !== String(zone)));
    set({ zoneSeconds: seconds ? { ...rest, [zone]: seconds } : rest });
  }
  const scaleMargins = (factor: number) => measures((choice) => ({ ...choice, margin: marginOf(choice) * factor }));
  const pool = (one: number, other: number) => (choices.value = choicesJoined(choices.value, one, other));
  const part = (zone: number) => (choices.value = choicesParted(choices.value, zone));
  function takeAdvice(option: ImpracticalOption): void {
    if (option.kind === 'widerMargin') scaleMargins(option.scale);
    if (option.kind === 'lowerConfidence') measures((choice) => noSurerThan(option.confidence, choice));
    if (option.kind === 'poolZones') pool(Number(option.zones[0]), Number(option.zones[1]));
  }
  return { toggle, adjust, setTyped, setZoneSeconds, scaleMargins, takeAdvice, pool, part, set };
}
