import { onBeforeUnmount, ref, type Ref } from 'vue';
import { codeReader } from '../../lib/codeReader.ts';

/** There is a camera to ask for: browsers give none on pages without https. */
export const canScan = typeof navigator !== 'undefined' && typeof navigator.mediaDevices?.getUserMedia === 'function';

const betweenLooksMs = 120;

export interface LabelScan {
  isOn: Ref<boolean>;
  /** The camera was asked for and not given: no camera, or not allowed. The letters are typed then. */
  isRefused: Ref<boolean>;
  /** What the camera saw is a code, but none of our labels. */
  isStrange: Ref<boolean>;
  start: () => Promise<void>;
  stop: () => void;
}

/** Looks through the camera until `read` takes what it saw. */
export function useLabelScan(video: Ref<HTMLVideoElement | null>, read: (text: string) => boolean): LabelScan {
  const [isOn, isRefused, isStrange] = [ref(false), ref(false), ref(false)];
  let stream: MediaStream | null = null;

  function stop(): void {
    isOn.value = false;
    isStrange.value = false;
    stream?.getTracks().forEach((track) => track.stop());
    stream = null;
  }

  async function start(): Promise<void> {
    stream = await navigator.mediaDevices.getUserMedia({ video: { facingMode: 'environment' } }).catch(() => null);
    // A phone that has not kept the reader, and no signal: the letters are typed then as well.
    const look = stream && (await codeReader().catch(() => null));
    isRefused.value = !look;
    // The screen may have been left while the browser asked.
    if (!look || !video.value) return stop();
    isOn.value = true;
    video.value.srcObject = stream;
    // Stopped before the first picture came: the loop below sees it.
    await video.value.play().catch(() => undefined);
    while (isOn.value && video.value) {
      const found = await look(video.value);
      isStrange.value = found.length > 0;
      if (found.some(read)) stop();
      await new Promise((wait) => setTimeout(wait, betweenLooksMs));
    }
  }

  onBeforeUnmount(stop);
  return { isOn, isRefused, isStrange, start, stop };
}
