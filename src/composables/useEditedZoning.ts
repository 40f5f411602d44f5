import { onBeforeUnmount, shallowRef } from 'vue';
import type { BlockView } from '../../shared/contracts/blocks.ts';
import type { BlockRowView } from '../../shared/contracts/rows.ts';
import type { ZoneEditLine, ZoningDoubt, ZoningLine, ZoningPresence, ZoningView } from '../../shared/contracts/zonings.ts';
import { useBlocksStore } from '../stores/blocks.ts';
import { useZoningsStore } from '../stores/zonings.ts';

const presenceMs = 20_000;

/** A zoning as the server has it, all that its editor shows of it, and who else has it open. `isTold`: whether the others are told of this screen. */
export function useEditedZoning(which: () => { estateId: string; zoningId: string }, isTold: () => boolean) {
  const [store, blocks] = [useZoningsStore(), useBlocksStore()];
  const zoning = shallowRef<ZoningView | null>(null);
  const block = shallowRef<BlockView | null>(null);
  const rows = shallowRef<readonly BlockRowView[]>([]);
  const labels = shallowRef<Uint8Array>(new Uint8Array());
  const edits = shallowRef<readonly ZoneEditLine[]>([]);
  const doubt = shallowRef<ZoningDoubt | null>(null);
  const versions = shallowRef<readonly ZoningLine[]>([]);
  const presence = shallowRef<ZoningPresence | null>(null);

  /** All of it; nothing of a run that has no zones yet, or never will. */
  async function load(): Promise<ZoningView> {
    const { estateId, zoningId } = which();
    const view = await store.view(estateId, zoningId);
    if (view.state === 'running' || view.state === 'failed') return view;
    const [made, found, all, hand] = await Promise.all([blocks.block(estateId, view.blockId), blocks.rows(estateId, view.blockId), store.list(estateId, view.blockId), handOf()]);
    [zoning.value, block.value, rows.value, versions.value] = [view, made, found.items, all];
    [edits.value, labels.value, doubt.value] = hand;
    void tellPresence();
    return view;
  }

  /** After each act the server's zones are the truth: edits and labels are read again beside it. */
  async function take(view: ZoningView): Promise<void> {
    const hand = await handOf();
    zoning.value = view;
    [edits.value, labels.value, doubt.value] = hand;
  }

  function handOf() {
    const { estateId, zoningId } = which();
    return Promise.all([store.edits(estateId, zoningId), store.labels(estateId, zoningId), store.doubt(estateId, zoningId)]);
  }

  /** A screen that cannot tell is not worth a message. */
  async function tellPresence(): Promise<void> {
    const { estateId, zoningId } = which();
    if (isTold()) presence.value = await store.presence(estateId, zoningId).catch(() => null);
  }

  const heartbeat = setInterval(() => void tellPresence(), presenceMs);
  onBeforeUnmount(() => clearInterval(heartbeat));
  return { zoning, block, rows, labels, edits, doubt, versions, presence, load, take };
}
