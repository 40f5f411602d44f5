import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { EarlierFileView } from '../../shared/contracts/earlier.ts';
import { http } from '../lib/http.ts';

/** Tables of readings of earlier visits of one estate; one of them is open. */
export const useEarlierStore = defineStore('earlier', () => {
  const files = shallowRef<readonly EarlierFileView[]>([]);
  const open = shallowRef<EarlierFileView | null>(null);
  const base = (estateId: string) => `/api/estates/${estateId}/earlier-readings`;

  async function load(estateId: string): Promise<void> {
    files.value = (await http.get<{ items: EarlierFileView[] }>(base(estateId))).items;
  }

  async function send(estateId: string, file: File): Promise<void> {
    const form = new FormData();
    form.append('files', file, file.name);
    open.value = await http.upload<EarlierFileView>(base(estateId), form);
    await load(estateId);
  }

  async function show(estateId: string, fileId: string): Promise<void> {
    open.value = await http.get<EarlierFileView>(`${base(estateId)}/${fileId}`);
  }

  async function answer(estateId: string, fileId: string, answers: Readonly<Record<string, string>>): Promise<void> {
    open.value = await http.patch<EarlierFileView>(`${base(estateId)}/${fileId}`, { answers });
  }

  /** Returns how many readings are stored now. */
  async function store(estateId: string, fileId: string, leaveOut: number): Promise<number> {
    const stored = await http.post<EarlierFileView>(`${base(estateId)}/${fileId}/store`, { leaveOut });
    open.value = null;
    await load(estateId);
    return stored.summary?.readings ?? 0;
  }

  async function takeBack(estateId: string, fileId: string, reason: string): Promise<void> {
    await http.post(`${base(estateId)}/${fileId}/take-back`, { reason });
    await load(estateId);
  }

  async function dismiss(estateId: string, fileId: string): Promise<void> {
    await http.delete(`${base(estateId)}/${fileId}`);
    open.value = null;
    await load(estateId);
  }

  const original = (estateId: string, file: EarlierFileView) => http.download(`${base(estateId)}/${file.id}/original`, file.fileName);

  return { files, open, load, send, show, answer, store, takeBack, dismiss, original };
});
