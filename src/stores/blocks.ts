import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { BlockChange, BlockLine, BlockView, ChangedBlock, NewBlockInput, OutlineCheck } from '../../shared/contracts/blocks.ts';
import type { AuditLine } from '../../shared/contracts/records.ts';
import type { BlockRowsView, CensusChange, CensusOutcome, NumberingChange } from '../../shared/contracts/rows.ts';
import { http } from '../lib/http.ts';

interface Listed<Item> {
  items: Item[];
}

type Area = OutlineCheck['boundary'] | NewBlockInput['boundary'];

/** Blocks of an estate: the ledger, and everything about one of them. */
export const useBlocksStore = defineStore('blocks', () => {
  const lines = shallowRef<readonly BlockLine[]>([]);
  const linesOf = shallowRef<string | null>(null);
  const base = (estateId: string) => `/api/estates/${estateId}/blocks`;

  async function load(estateId: string): Promise<void> {
    if (linesOf.value !== estateId) lines.value = [];
    const found = await http.get<Listed<BlockLine>>(base(estateId));
    lines.value = found.items;
    linesOf.value = estateId;
  }

  const block = (estateId: string, blockId: string) => http.get<BlockView>(`${base(estateId)}/${blockId}`);
  const rows = (estateId: string, blockId: string) => http.get<BlockRowsView>(`${base(estateId)}/${blockId}/rows`);
  const check = (estateId: string, outline: { boundary: Area; blockId: string | null; bookAreaHa: number | null }) => http.post<OutlineCheck>(`${base(estateId)}/check`, outline);
  const create = (estateId: string, made: NewBlockInput) => http.post<ChangedBlock>(base(estateId), made);
  const change = (estateId: string, of: { id: string; version: number }, changed: BlockChange) => http.patch<ChangedBlock>(`${base(estateId)}/${of.id}`, changed, { ifMatch: of.version });
  const retire = (estateId: string, of: { id: string; version: number }) => http.delete(`${base(estateId)}/${of.id}`, { ifMatch: of.version });
  const renumber = (estateId: string, of: { id: string; version: number }, changed: NumberingChange) => http.put<BlockRowsView>(`${base(estateId)}/${of.id}/rows`, changed, { ifMatch: of.version });
  const count = (estateId: string, blockId: string, changed: Partial<CensusChange>) => http.put<CensusOutcome>(`${base(estateId)}/${blockId}/vines`, changed);
  const history = (estateId: string, blockId: string) => http.get<{ items: AuditLine[] }>(`/api/estates/${estateId}/audit`, { query: { subject: blockId } });

  return { lines, load, block, rows, check, create, change, retire, renumber, count, history };
});
