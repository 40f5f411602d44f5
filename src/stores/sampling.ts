import { defineStore } from 'pinia';
import type { z } from 'zod';
import type { BlockRowsView } from '../../shared/contracts/rows.ts';
import type { NewPlan, PlanBasis, PlanChange, PlanList, PlanView } from '../../shared/contracts/plans.ts';
import type { FieldRound, newRound, RoundSummary } from '../../shared/contracts/rounds.ts';
import type { PersonView } from '../../shared/contracts/people.ts';
import { http } from '../lib/http.ts';

interface Listed<Item> {
  items: Item[];
}

/** Plans, their vines, and the rounds that carry them to people. */
export const useSamplingStore = defineStore('sampling', () => {
  const base = (estateId: string) => `/api/estates/${estateId}`;

  const plans = (estateId: string) => http.get<PlanList>(`${base(estateId)}/plans`);
  const basis = (estateId: string, zoningId: string) => http.get<PlanBasis>(`${base(estateId)}/zonings/${zoningId}/plan-basis`);
  const plan = (estateId: string, planId: string) => http.get<PlanView>(`${base(estateId)}/plans/${planId}`);
  const make = (estateId: string, zoningId: string, made: NewPlan) => http.post<PlanView>(`${base(estateId)}/zonings/${zoningId}/plans`, made);
  const change = (estateId: string, planId: string, changed: PlanChange) => http.patch<PlanView>(`${base(estateId)}/plans/${planId}`, changed);
  const lock = (estateId: string, planId: string) => http.post<PlanView>(`${base(estateId)}/plans/${planId}/lock`);
  const redraw = (estateId: string, planId: string, reason: string) => http.post<PlanView>(`${base(estateId)}/plans/${planId}/redraw`, { reason });
  const download = (estateId: string, planId: string, format: 'csv' | 'gpx') => http.download(`${base(estateId)}/plans/${planId}/export`, `plan.${format}`, { query: { format } });

  const rounds = async (estateId: string, planId?: string) => (await http.get<Listed<RoundSummary>>(`${base(estateId)}/rounds`, { query: { plan: planId } })).items;
  const round = (estateId: string, roundId: string) => http.get<FieldRound>(`${base(estateId)}/rounds/${roundId}`);
  const send = (estateId: string, planId: string, sent: z.input<typeof newRound>) => http.post<{ id: string }>(`${base(estateId)}/plans/${planId}/rounds`, sent);
  const callOff = (estateId: string, roundId: string) => http.patch(`${base(estateId)}/rounds/${roundId}`, { state: 'called off' });
  const sheet = (estateId: string, roundId: string, paper: 'a4' | 'letter') => http.download(`${base(estateId)}/rounds/${roundId}/sheet`, 'sheet.pdf', { query: { paper } });

  const rows = (estateId: string, blockId: string) => http.get<BlockRowsView>(`${base(estateId)}/blocks/${blockId}/rows`);
  const people = async (estateId: string) => (await http.get<Listed<PersonView>>(`${base(estateId)}/people`)).items;

  return { plans, basis, plan, make, change, lock, redraw, download, rounds, round, send, callOff, sheet, rows, people };
});
