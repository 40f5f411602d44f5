import { defineStore } from 'pinia';
import { shallowRef } from 'vue';
import type { ImportAnswers, ImportView, OutlinesTaken } from '../../shared/contracts/imports.ts';
import { fileGroups } from '../../shared/importing/fileGroups.ts';
import { http } from '../lib/http.ts';
import { HttpProblem } from '../lib/httpProblem.ts';
import { inPiecesFromBytes, resumableUpload, type ResumableUpload } from '../lib/resumableUpload.ts';

/** A file on its way to the server. */
export interface Sending {
  readonly id: number;
  readonly fileName: string;
  readonly bytes: number;
  /** Share sent, 0…1; then the server reads. */
  readonly share: number;
  readonly problem: HttpProblem | null;
  /** paused by a person; waiting for the line to come back. */
  readonly halt: 'paused' | 'waiting' | null;
  /** Only what goes in pieces can rest and go on. */
  readonly pause: (() => void) | null;
  readonly resume: () => void;
  readonly stop: () => void;
}

type Taken = { blocks: (Omit<Partial<OutlinesTaken['blocks'][number]>, 'outline' | 'name'> & { outline: number; name: string })[] };

/** The import desk: lines of files that were received, and of those on their way. */
export const useImportsStore = defineStore('imports', () => {
  const lines = shallowRef<readonly ImportView[]>([]);
  const sending = shallowRef<readonly Sending[]>([]);
  let last = 0;
  let changes = 0;
  let linesOf: string | null = null;
  /** When each line was last known from an answer: what was asked before that is older news. */
  const known = new Map<string, number>();
  const dismissed = new Set<string>();
  const base = (estateId: string) => `/api/estates/${estateId}/imports`;

  /** Asks again when a line came or went meanwhile: the list on its way does not know of it, and would take it off the screen. */
  async function load(estateId: string): Promise<void> {
    if (linesOf !== estateId) [lines.value, linesOf] = [[], estateId];
    const before = changes;
    const { items } = await http.get<{ items: ImportView[] }>(base(estateId));
    if (linesOf !== estateId) return;
    if (changes !== before) return load(estateId);
    lines.value = items;
  }

  /** Puts a line in its place; a new one comes first. One that somebody took off meanwhile stays off. */
  function keep(line: ImportView): ImportView {
    if (dismissed.has(line.id)) return line;
    changes += 1;
    known.set(line.id, changes);
    const isThere = lines.value.some((each) => each.id === line.id);
    lines.value = isThere ? lines.value.map((each) => (each.id === line.id ? line : each)) : [line, ...lines.value];
    return line;
  }

  /** A line as it was when it was asked for; an answer that was kept since then is newer. */
  function keepUnlessOlder(line: ImportView, askedAt: number): ImportView {
    return (known.get(line.id) ?? 0) > askedAt ? line : keep(line);
  }

  function patchSending(id: number, change: Partial<Sending>): void {
    sending.value = sending.value.map((each) => (each.id === id ? { ...each, ...change } : each));
  }

  function forget(id: number): void {
    sending.value = sending.value.filter((each) => each.id !== id);
  }

  /** Sends files one after the other, each with its own line; what belongs together goes together. */
  async function send(estateId: string, files: readonly File[]): Promise<ImportView[]> {
    const waiting = fileGroups(files).map(({ main, beside }) => lineUp([main, ...beside]));
    const received: ImportView[] = [];
    for (const one of waiting) received.push(...(await sendGroup(estateId, one)));
    return received;
  }

  interface Waiting {
    readonly id: number;
    readonly group: readonly File[];
    readonly abort: AbortController;
  }

  function lineUp(group: readonly File[]): Waiting {
    const [id, abort] = [++last, new AbortController()];
    const bytes = group.reduce((sum, file) => sum + file.size, 0);
    const stop = () => (abort.abort(), forget(id));
    sending.value = [...sending.value, { id, fileName: group[0]!.name, bytes, share: 0, problem: null, halt: null, pause: null, resume: () => undefined, stop }];
    return { id, group, abort };
  }

  async function sendGroup(estateId: string, { id, group, abort }: Waiting): Promise<ImportView[]> {
    if (abort.signal.aborted) return [];
    if (group.some((file) => file.size >= inPiecesFromBytes)) return sendInPieces(estateId, { id, group, abort });
    const form = new FormData();
    for (const file of group) form.append('files', file, file.name);
    try {
      const { items } = await http.upload<{ items: ImportView[] }>(base(estateId), form, { signal: abort.signal, onProgress: (sent, total) => patchSending(id, { share: total > 0 ? sent / total : 0 }) });
      forget(id);
      return items.map(keep);
    } catch (error) {
      return refused(id, error);
    }
  }

  /** Large files, one after the other in pieces; when all of a group have arrived they are taken in together. */
  async function sendInPieces(estateId: string, { id, group, abort }: Waiting): Promise<ImportView[]> {
    const total = group.reduce((sum, file) => sum + file.size, 0);
    const uploads: string[] = [];
    let before = 0;
    try {
      for (const file of group) {
        const upload = resumableUpload(file, `${base(estateId)}/pieces`, {
          onProgress: (sent) => patchSending(id, { share: (before + sent) / total }),
          onWaiting: (isWaiting) => patchSending(id, { halt: isWaiting ? 'waiting' : null }),
        });
        patchSending(id, controlsOf(id, upload));
        abort.signal.addEventListener('abort', upload.stop, { once: true });
        uploads.push(await upload.done);
        before += file.size;
      }
      patchSending(id, { share: 1, halt: null, pause: null });
      const { items } = await http.post<{ items: ImportView[] }>(`${base(estateId)}/arrived`, { uploads });
      forget(id);
      return items.map(keep);
    } catch (error) {
      return refused(id, error);
    }
  }

  function controlsOf(id: number, upload: ResumableUpload): Partial<Sending> {
    return {
      pause: () => (upload.pause(), patchSending(id, { halt: 'paused' })),
      resume: () => (patchSending(id, { halt: null }), upload.resume()),
    };
  }

  function refused(id: number, error: unknown): ImportView[] {
    if (error instanceof DOMException && error.name === 'AbortError') {
      forget(id);
      return [];
    }
    if (!(error instanceof HttpProblem)) throw error;
    const items = error.facts.items as ImportView[] | undefined;
    if (items === undefined) patchSending(id, { problem: error });
    else forget(id);
    return (items ?? []).map(keep);
  }

  async function refresh(estateId: string, importId: string): Promise<ImportView> {
    const askedAt = changes;
    return keepUnlessOlder(await http.get<ImportView>(`${base(estateId)}/${importId}`), askedAt);
  }

  /** A line that somebody else brought further meanwhile is shown as it is now, with the reason why the answer came too late. */
  async function answer(estateId: string, importId: string, answers: ImportAnswers): Promise<ImportView> {
    try {
      return keep(await http.patch<ImportView>(`${base(estateId)}/${importId}`, { answers }));
    } catch (error) {
      if (error instanceof HttpProblem && error.status === 409) await refresh(estateId, importId).catch(() => undefined);
      throw error;
    }
  }

  async function takeOutlines(estateId: string, importId: string, taken: Taken): Promise<{ id: string; name: string }[]> {
    const { items } = await http.post<{ items: { id: string; name: string }[] }>(`${base(estateId)}/${importId}/blocks`, taken);
    await refresh(estateId, importId);
    return items;
  }

  async function dismiss(estateId: string, importId: string): Promise<void> {
    await http.delete(`${base(estateId)}/${importId}`);
    dismissed.add(importId);
    changes += 1;
    lines.value = lines.value.filter((each) => each.id !== importId);
  }

  const stop = (estateId: string, jobId: string) => http.delete(`/api/estates/${estateId}/jobs/${jobId}`);
  const original = (estateId: string, file: { fileId: string; fileName: string }) => http.download(`/api/estates/${estateId}/files/${file.fileId}/download`, file.fileName);

  return { lines, sending, load, send, forget, refresh, answer, takeOutlines, dismiss, stop, original };
});
