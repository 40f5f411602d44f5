import { onBeforeUnmount, ref } from 'vue';

/** A zone on its way: out of a lot, or from the list of zones when `lotId` is null. */
export interface DraggedZone {
  readonly zoneId: string;
  readonly lotId: string | null;
}

const leastPx = 6;

/**
 * Dragging zones between lots with mouse, pen or finger. Places to drop on carry `data-drop` with a lot's id, or
 * "free". A press that does not move stays a press.
 */
export function useLotDrag(drop: (zone: DraggedZone, place: string) => void) {
  const dragged = ref<DraggedZone | null>(null);
  const over = ref<string | null>(null);
  const at = ref({ x: 0, y: 0 });
  let pressed: { zone: DraggedZone; x: number; y: number } | null = null;

  function press(event: PointerEvent, zone: DraggedZone): void {
    if (event.button !== 0) return;
    pressed = { zone, x: event.clientX, y: event.clientY };
    window.addEventListener('pointermove', move);
    window.addEventListener('pointerup', release);
    window.addEventListener('pointercancel', stop);
    window.addEventListener('keydown', escape);
  }

  function move(event: PointerEvent): void {
    if (pressed === null) return;
    if (dragged.value === null && Math.hypot(event.clientX - pressed.x, event.clientY - pressed.y) < leastPx) return;
    dragged.value = pressed.zone;
    at.value = { x: event.clientX, y: event.clientY };
    over.value = placeAt(event);
  }

  function release(event: PointerEvent): void {
    const zone = dragged.value;
    const place = zone === null ? null : placeAt(event);
    stop();
    if (zone !== null && place !== null && place !== (zone.lotId ?? 'free')) drop(zone, place);
  }

  function escape(event: KeyboardEvent): void {
    if (event.key === 'Escape') stop();
  }

  function stop(): void {
    pressed = null;
    dragged.value = null;
    over.value = null;
    window.removeEventListener('pointermove', move);
    window.removeEventListener('pointerup', release);
    window.removeEventListener('pointercancel', stop);
    window.removeEventListener('keydown', escape);
  }

  onBeforeUnmount(stop);
  return { dragged, over, at, press };
}

function placeAt(event: PointerEvent): string | null {
  return document.elementFromPoint(event.clientX, event.clientY)?.closest('[data-drop]')?.getAttribute('data-drop') ?? null;
}
