import { defineStore } from 'pinia';
import { decodeFloatCells, decodeLabels } from '../../shared/analysis/cellBytes.ts';
import type { AsideReading, BlockLayerView, CleaningChange, LayerBeside, LayerChange, OverrideChange, ReliefView } from '../../shared/contracts/layers.ts';
import { http } from '../lib/http.ts';

/** Layers on blocks and their cells. Cells are not kept here: a screen holds those it shows. */
export const useLayersStore = defineStore('layers', () => {
  const base = (estateId: string) => `/api/estates/${estateId}`;

  const onBlock = async (estateId: string, blockId: string) => (await http.get<{ items: BlockLayerView[] }>(`${base(estateId)}/blocks/${blockId}/layers`)).items;
  const cells = async (estateId: string, layer: { id: string; blockId: string }) => decodeFloatCells(new Uint8Array(await http.getBytes(`${base(estateId)}/layers/${layer.id}/cells`, { query: { block: layer.blockId } })));
  /** Where the findings hold, a bit each; null where none has a place of its own. */
  const marks = async (estateId: string, layer: { id: string; blockId: string }) => {
    const bytes = new Uint8Array(await http.getBytes(`${base(estateId)}/layers/${layer.id}/marks`, { query: { block: layer.blockId } }));
    return bytes.length === 0 ? null : decodeLabels(bytes);
  };
  const change = (estateId: string, layerId: string, changed: LayerChange) => http.patch(`${base(estateId)}/layers/${layerId}`, changed);
  const override = (estateId: string, layerId: string, made: OverrideChange) => http.post(`${base(estateId)}/layers/${layerId}/override`, made);
  const aside = async (estateId: string, layer: { id: string; blockId: string }) => (await http.get<{ items: AsideReading[] }>(`${base(estateId)}/layers/${layer.id}/aside`, { query: { block: layer.blockId } })).items;
  const beside = async (estateId: string, layerId: string, blockId: string) => (await http.get<{ items: LayerBeside[] }>(`${base(estateId)}/layers/${layerId}/beside`, { query: { block: blockId } })).items;
  const clean = async (estateId: string, layerId: string, taken: CleaningChange['taken']) => (await http.put<{ jobId: string }>(`${base(estateId)}/layers/${layerId}/cleaning`, { taken })).jobId;
  const retire = (estateId: string, layerId: string) => http.delete(`${base(estateId)}/layers/${layerId}`);
  const original = (estateId: string, file: { fileId: string; fileName: string }) => http.download(`${base(estateId)}/files/${file.fileId}/download`, file.fileName);

  const relief = (estateId: string) => http.get<ReliefView | null>(`${base(estateId)}/relief`);

  return { onBlock, cells, marks, relief, aside, beside, clean, change, override, retire, original };
});
