import { defineStore } from 'pinia';
import type { ClashChoice } from '../../shared/contracts/bags.ts';
import type { ConflictAnswer, ConflictList } from '../../shared/contracts/conflicts.ts';
import { http } from '../lib/http.ts';

/** Records that disagree, and what people said about them. */
export const useConflictsStore = defineStore('conflicts', () => {
  const list = (estateId: string) => http.get<ConflictList>(`/api/estates/${estateId}/conflicts`);
  const settle = (estateId: string, conflictId: string, choice: ConflictAnswer, keptReadingId: string | null) => http.post(`/api/estates/${estateId}/conflicts/${conflictId}/settle`, { choice, keptReadingId });
  const reopen = (estateId: string, conflictId: string) => http.post(`/api/estates/${estateId}/conflicts/${conflictId}/reopen`, {});
  const settleBag = (estateId: string, bagId: string, choice: ClashChoice) => http.post(`/api/estates/${estateId}/bags/${bagId}/settle`, choice);
  const reopenBag = (estateId: string, bagId: string) => http.post(`/api/estates/${estateId}/bags/${bagId}/reopen`, {});
  return { reopenBag, settleBag, list, settle, reopen };
});
