import { defineStore } from 'pinia';
import type { Found } from '../../shared/contracts/search.ts';
import type { TodayView } from '../../shared/contracts/today.ts';
import { http } from '../lib/http.ts';

/** What waits for the person in an estate, and what is found there by name. */
export const useTodayStore = defineStore('today', () => {
  const waiting = (estateId: string) => http.get<TodayView>(`/api/estates/${estateId}/today`);
  const find = async (estateId: string, typed: string) => (await http.get<{ items: Found[] }>(`/api/estates/${estateId}/search`, { query: { q: typed } })).items;
  return { waiting, find };
});
