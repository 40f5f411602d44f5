import { defineStore } from 'pinia';
import type { z } from 'zod';
import type { MeasureChange, MeasureView, newMeasure } from '../../shared/contracts/measures.ts';
import type { BlockRowsView } from '../../shared/contracts/rows.ts';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { BasisChoices, NewPlan, PlanChange, PlanChoices } from '../../shared/contracts/planChoices.ts';
import type { EarlierPlan, PlanList, PlanStanding, PlanView, ZoneDivision } from '../../shared/contracts/plans.ts';
import type { DayWalk, PlanWalk } from '../../shared/contracts/planWalks.ts';
import type { FieldRound, newDay, newRound, RoundSummary } from '../../shared/contracts/rounds.ts';
import type { PersonView } from '../../shared/contracts/people.ts';
import { http } from '../lib/http.ts';

/** Plans of a day, in the order given or in the quickest. */
export interface DayAsked {
  plans: string[];
  kmPerHour: number;
  keepOrder: boolean;
}

interface Listed<Item> {
  items: Item[];
}

/** Plans, their vines, and the rounds that carry them to people. */
export const useSamplingStore = defineStore('sampling', () => {
  const base = (estateId: string) => `/api/estates/${estateId}`;

  const plans = (estateId: string) => http.get<PlanList>(`${base(estateId)}/plans`);
  const basis = (estateId: string, zoningId: string, how?: BasisChoices) => http.get<PlanBasis>(`${base(estateId)}/zonings/${zoningId}/plan-basis`, how ? { query: { ...how.spread, edgeRows: how.draw.edgeRows, endVines: how.draw.endVines, borderM: how.draw.borderM ?? undefined } } : {});
  const earlierPlan = (estateId: string, zoningId: string, planId: string) => http.get<EarlierPlan>(`${base(estateId)}/zonings/${zoningId}/earlier-plans/${planId}`);
  const plan = (estateId: string, planId: string) => http.get<PlanView>(`${base(estateId)}/plans/${planId}`);
  const make = (estateId: string, zoningId: string, made: NewPlan) => http.post<PlanView>(`${base(estateId)}/zonings/${zoningId}/plans`, made);
  const change = (estateId: string, planId: string, changed: PlanChange) => http.patch<PlanView>(`${base(estateId)}/plans/${planId}`, changed);
  const lock = (estateId: string, planId: string) => http.post<PlanView>(`${base(estateId)}/plans/${planId}/lock`);
  const redraw = (estateId: string, planId: string, reason: string) => http.post<PlanView>(`${base(estateId)}/plans/${planId}/redraw`, { reason });
  const download = (estateId: string, planId: string, format: string) => http.download(`${base(estateId)}/plans/${planId}/export`, `plan.${format}`, { query: { format } });

  const divisions = (estateId: string, zoningId: string, choices: PlanChoices) => http.post<Listed<ZoneDivision>>(`${base(estateId)}/zonings/${zoningId}/divisions`, { choices });
  const walk = (estateId: string, planId: string, asked: { people: number; end: 'gate' | 'anywhere'; gate: string | null }) => http.get<PlanWalk>(`${base(estateId)}/plans/${planId}/walk`, { query: asked });
  const day = (estateId: string, asked: DayAsked) => http.post<DayWalk>(`${base(estateId)}/plans/day`, asked);
  const sendDay = async (estateId: string, sent: z.input<typeof newDay>) => (await http.post<Listed<{ id: string }>>(`${base(estateId)}/plans/day/rounds`, sent)).items;
  const daySheet = (estateId: string, onDate: string, paper: 'a4' | 'letter') => http.download(`${base(estateId)}/rounds/day-sheet`, 'day.pdf', { query: { onDate, paper } });
  const standing = async (estateId: string, planId: string) => (await http.get<Listed<PlanStanding>>(`${base(estateId)}/plans/${planId}/standing`)).items;

  const rounds = async (estateId: string, planId?: string) => (await http.get<Listed<RoundSummary>>(`${base(estateId)}/rounds`, { query: { plan: planId } })).items;
  const round = (estateId: string, roundId: string) => http.get<FieldRound>(`${base(estateId)}/rounds/${roundId}`);
  const send = (estateId: string, planId: string, sent: z.input<typeof newRound>) => http.post<{ id: string }>(`${base(estateId)}/plans/${planId}/rounds`, sent);
  /** For everybody who walks it. */
  const endRound = (estateId: string, roundId: string, state: 'closed' | 'called off') => http.patch(`${base(estateId)}/rounds/${roundId}`, { state, whole: true });
  const sheet = (estateId: string, roundId: string, paper: 'a4' | 'letter') => http.download(`${base(estateId)}/rounds/${roundId}/sheet`, 'sheet.pdf', { query: { paper } });

  const labels = (estateId: string, roundId: string, printed: { paper: 'a4' | 'letter' | 'single'; per: 'vine' | 'zone' }) => http.download(`${base(estateId)}/rounds/${roundId}/labels`, 'labels.pdf', { method: 'POST', query: printed });
  const blankLabels = (estateId: string, printed: { paper: 'a4' | 'letter' | 'single'; count: number }) => http.download(`${base(estateId)}/labels`, 'labels.pdf', { method: 'POST', query: printed });

  const measures = async (estateId: string) => (await http.get<Listed<MeasureView>>(`${base(estateId)}/measures`)).items;
  const addMeasure = (estateId: string, made: z.input<typeof newMeasure>) => http.post<MeasureView>(`${base(estateId)}/measures`, made);
  const changeMeasure = (estateId: string, measureId: string, changed: MeasureChange) => http.patch<MeasureView>(`${base(estateId)}/measures/${measureId}`, changed);

  const rows = (estateId: string, blockId: string) => http.get<BlockRowsView>(`${base(estateId)}/blocks/${blockId}/rows`);
  const people = async (estateId: string) => (await http.get<Listed<PersonView>>(`${base(estateId)}/people`)).items;

  return { plans, basis, earlierPlan, plan, make, change, lock, redraw, download, rounds, round, send, endRound, sheet, labels, blankLabels, divisions, walk, day, sendDay, daySheet, standing, measures, addMeasure, changeMeasure, rows, people };
});
