import { defineStore } from 'pinia';
import type { z } from 'zod';
import type { NewPickInterval, newRestriction, RestrictionView } from '../../shared/contracts/restrictions.ts';
import { http } from '../lib/http.ts';

interface NamedBlock {
  readonly id: string;
  readonly name: string;
}

/** Entry restrictions of the estate, as responsible people typed them. */
export const useRestrictionsStore = defineStore('restrictions', () => {
  const list = (estateId: string) => http.get<{ items: RestrictionView[]; lifters: string[] }>(`/api/estates/${estateId}/restrictions`);
  const blocks = async (estateId: string) => (await http.get<{ items: NamedBlock[] }>(`/api/estates/${estateId}/blocks`)).items;
  const set = (estateId: string, restriction: z.input<typeof newRestriction>) => http.post(`/api/estates/${estateId}/restrictions`, restriction);
  const lift = (estateId: string, restrictionId: string, reason: string) => http.post(`/api/estates/${estateId}/restrictions/${restrictionId}/lift`, { reason });
  const changePickInterval = (estateId: string, restrictionId: string, change: NewPickInterval) => http.post(`/api/estates/${estateId}/restrictions/${restrictionId}/pick-interval`, change);
  const rows = async (estateId: string, blockId: string) => (await http.get<{ items: { id: string; label: string }[] }>(`/api/estates/${estateId}/blocks/${blockId}/rows`)).items;
  return { list, blocks, rows, set, lift, changePickInterval };
});
