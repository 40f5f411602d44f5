import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { LabBench, LabFileFacts, LabFileView, LabOutcome, ResultState } from '../../shared/contracts/lab.ts';
import { http } from '../lib/http.ts';

export interface Receipt {
  readonly code: string;
  readonly state: 'here' | 'hereBefore' | 'extra';
}

/** The lab's bench of one estate: bags, figures and files. Every deed reads the bench anew. */
export const useLabStore = defineStore('lab', () => {
  const bench = shallowRef<LabBench | null>(null);
  const files = shallowRef<readonly LabFileView[]>([]);
  const openFile = shallowRef<LabFileView | null>(null);
  const base = (estateId: string) => `/api/estates/${estateId}`;

  async function load(estateId: string): Promise<void> {
    bench.value = await http.get<LabBench>(`${base(estateId)}/lab`);
  }

  async function loadFiles(estateId: string): Promise<void> {
    files.value = (await http.get<{ items: LabFileView[] }>(`${base(estateId)}/lab/files`)).items;
  }

  async function receive(estateId: string, codes: readonly string[]): Promise<readonly Receipt[]> {
    const { outcomes } = await http.post<{ outcomes: Receipt[] }>(`${base(estateId)}/bags/received`, { codes });
    await load(estateId);
    return outcomes;
  }

  /** Answers the bags that are missing by this: with `ifExpected` those that nobody has taken in meanwhile. */
  async function missing(estateId: string, bagIds: readonly string[], ifExpected = false): Promise<readonly string[]> {
    const changed = await http.post<{ bagIds: string[] }>(`${base(estateId)}/bags/missing`, { bagIds, ifExpected });
    await load(estateId);
    return changed.bagIds;
  }

  async function expectAgain(estateId: string, bagIds: readonly string[]): Promise<void> {
    await http.post(`${base(estateId)}/bags/expected`, { bagIds });
    await load(estateId);
  }

  async function swap(estateId: string, codes: readonly [string, string], reason: string): Promise<void> {
    await http.post(`${base(estateId)}/bags/swap`, { codes, reason });
    await load(estateId);
  }

  async function settle(estateId: string, bagId: string, choice: { choice: string; newCode: string | null; reason: string }): Promise<void> {
    await http.post(`${base(estateId)}/bags/${bagId}/settle`, choice);
    await load(estateId);
  }

  async function storeResults(estateId: string, results: readonly object[]): Promise<readonly LabOutcome[]> {
    const { outcomes } = await http.post<{ outcomes: LabOutcome[] }>(`${base(estateId)}/lab/results`, { results });
    await load(estateId);
    return outcomes;
  }

  async function setState(estateId: string, resultIds: readonly string[], state: ResultState): Promise<void> {
    await http.put(`${base(estateId)}/lab/results/state`, { resultIds, state });
    await load(estateId);
  }

  async function exclude(estateId: string, resultId: string, reason: string | null): Promise<void> {
    await http.put(`${base(estateId)}/lab/results/${resultId}/exclusion`, { reason });
    await load(estateId);
  }

  async function sendFile(estateId: string, file: File): Promise<void> {
    const form = new FormData();
    form.append('files', file, file.name);
    openFile.value = await http.upload<LabFileView>(`${base(estateId)}/lab/files`, form);
    await loadFiles(estateId);
  }

  async function showFile(estateId: string, fileId: string): Promise<void> {
    openFile.value = await http.get<LabFileView>(`${base(estateId)}/lab/files/${fileId}`);
  }

  async function answerFile(estateId: string, fileId: string, answers: Readonly<Record<string, string>>): Promise<void> {
    openFile.value = await http.patch<LabFileView>(`${base(estateId)}/lab/files/${fileId}`, { answers });
  }

  async function storeFile(estateId: string, fileId: string, facts: LabFileFacts): Promise<number> {
    const stored = await http.post<LabFileView>(`${base(estateId)}/lab/files/${fileId}/store`, facts);
    openFile.value = null;
    await Promise.all([load(estateId), loadFiles(estateId)]);
    return stored.storedCount ?? 0;
  }

  async function dismissFile(estateId: string, fileId: string): Promise<void> {
    await http.delete(`${base(estateId)}/lab/files/${fileId}`);
    openFile.value = null;
    await loadFiles(estateId);
  }

  const original = (estateId: string, file: LabFileView) => http.download(`${base(estateId)}/lab/files/${file.id}/original`, file.fileName);

  return { bench, files, openFile, load, loadFiles, receive, missing, expectAgain, swap, settle, storeResults, setState, exclude, sendFile, showFile, answerFile, storeFile, dismissFile, original };
});
