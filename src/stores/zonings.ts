import { defineStore } from 'pinia';
import type { z } from 'zod';
import type { newZoning, PublishEffects, ZoneEditLine, ZoneOperation, ZoningComparison, ZoningDoubt, ZoningLine, ZoningMemberships, ZoningPresence, ZoningSeasons, ZoningView } from '../../shared/contracts/zonings.ts';
import { http } from '../lib/http.ts';

interface Listed<Item> {
  items: Item[];
}

/** Zonings: run, read, kept, changed by hand, published. A view of one zoning always comes back whole. */
export const useZoningsStore = defineStore('zonings', () => {
  const base = (estateId: string) => `/api/estates/${estateId}`;

  const list = async (estateId: string, blockId: string | null) => (await http.get<Listed<ZoningLine>>(`${base(estateId)}/zonings`, { query: { block: blockId } })).items;
  const view = (estateId: string, zoningId: string, zones: number | null = null) => http.get<ZoningView>(`${base(estateId)}/zonings/${zoningId}`, { query: { zones } });
  const run = (estateId: string, blockId: string, options: z.input<typeof newZoning>) => http.post<{ zoningId: string; jobId: string }>(`${base(estateId)}/blocks/${blockId}/zonings`, options);
  const stop = (estateId: string, jobId: string) => http.delete(`${base(estateId)}/jobs/${jobId}`);
  const keep = (estateId: string, zoningId: string, kept: { chosenZones: number; revision: number }) => http.patch<ZoningView>(`${base(estateId)}/zonings/${zoningId}`, kept);
  const edits = async (estateId: string, zoningId: string) => (await http.get<Listed<ZoneEditLine>>(`${base(estateId)}/zonings/${zoningId}/edits`)).items;
  const edit = (estateId: string, zoningId: string, made: { operation: ZoneOperation; reason: string; revision: number }) => http.post<ZoningView>(`${base(estateId)}/zonings/${zoningId}/edits`, made);
  const step = (estateId: string, zoningId: string, made: { step: 'undo' | 'redo'; revision: number }) => http.post<ZoningView>(`${base(estateId)}/zonings/${zoningId}/${made.step}`, { revision: made.revision });
  const effects = (estateId: string, zoningId: string) => http.get<PublishEffects>(`${base(estateId)}/zonings/${zoningId}/effects`);
  const publish = (estateId: string, zoningId: string, made: { reason: string; revision: number; replaces?: number | null; callOff?: readonly string[] }) => http.post<ZoningView>(`${base(estateId)}/zonings/${zoningId}/publish`, made);
  const restore = (estateId: string, zoningId: string) => http.post<{ id: string }>(`${base(estateId)}/zonings/${zoningId}/restore`);
  const compare = (estateId: string, zoningId: string, { other, zones = null }: { other: string; zones?: number | null }) => http.get<ZoningComparison>(`${base(estateId)}/zonings/${zoningId}/compare`, { query: { with: other, zones } });
  const name = (estateId: string, zoningId: string, called: string) => http.patch<ZoningView>(`${base(estateId)}/zonings/${zoningId}`, { name: called });
  const doubt = (estateId: string, zoningId: string, zones: number | null = null) => http.get<ZoningDoubt>(`${base(estateId)}/zonings/${zoningId}/doubt`, { query: { zones } });
  const memberships = (estateId: string, { id, zones }: { id: string; zones: number | null }) => http.get<ZoningMemberships>(`${base(estateId)}/zonings/${id}/memberships`, { query: { zones } });
  const seasons = (estateId: string, zoningId: string) => http.get<ZoningSeasons>(`${base(estateId)}/zonings/${zoningId}/seasons`);
  const presence = (estateId: string, zoningId: string) => http.post<ZoningPresence>(`${base(estateId)}/zonings/${zoningId}/presence`, undefined, { unasked: true });
  const labels = async (estateId: string, zoningId: string) => new Uint8Array(await http.getBytes(`${base(estateId)}/zonings/${zoningId}/labels`));
  const exportFile = (estateId: string, zoning: { id: string; fileName: string; zones: number | null }, format: string) => http.download(`${base(estateId)}/zonings/${zoning.id}/export?format=${format}${zoning.zones === null ? '' : `&zones=${zoning.zones}`}`, zoning.fileName);
  const report = (estateId: string, zoning: { id: string; fileName: string; zones: number | null }, size: string) => http.download(`${base(estateId)}/zonings/${zoning.id}/report?size=${size}${zoning.zones === null ? '' : `&zones=${zoning.zones}`}`, zoning.fileName);

  return { list, view, run, stop, keep, edits, edit, step, effects, publish, restore, compare, name, doubt, memberships, seasons, presence, labels, exportFile, report };
});
