import { onBeforeUnmount, ref, type Ref } from 'vue';

interface Detector {
  detect: (source: HTMLVideoElement) => Promise<{ rawValue: string }[]>;
}
type DetectorClass = new (options: { formats: string[] }) => Detector;

/** The browser's own reader of codes (W3C Accelerated Shape Detection), where it has one. */
const detectorClass = (globalThis as { BarcodeDetector?: DetectorClass }).BarcodeDetector;

export const canScan = detectorClass !== undefined && typeof navigator !== 'undefined' && 'mediaDevices' in navigator;

export interface LabelScan {
  isOn: Ref<boolean>;
  /** The camera was asked for and not given: no camera, or not allowed. The letters are typed then. */
  isRefused: Ref<boolean>;
  start: () => Promise<void>;
  stop: () => void;
}

/** Looks through the camera until `read` takes what it saw. */
export function useLabelScan(video: Ref<HTMLVideoElement | null>, read: (text: string) => boolean): LabelScan {
  const isOn = ref(false);
  const isRefused = ref(false);
  let stream: MediaStream | null = null;

  function stop(): void {
    isOn.value = false;
    stream?.getTracks().forEach((track) => track.stop());
    stream = null;
  }

  async function start(): Promise<void> {
    if (!detectorClass) return;
    stream = await navigator.mediaDevices.getUserMedia({ video: { facingMode: 'environment' } }).catch(() => null);
    isRefused.value = stream === null;
    // The screen may have been left while the browser asked.
    if (!stream || !video.value) return stop();
    isOn.value = true;
    video.value.srcObject = stream;
    await video.value.play();
    const detector = new detectorClass({ formats: ['qr_code', 'code_128', 'data_matrix'] });
    while (isOn.value && video.value) {
      const found = await detector.detect(video.value).catch(() => []);
      if (found.some(({ rawValue }) => read(rawValue))) stop();
      await new Promise((wait) => setTimeout(wait, 120));
    }
  }

  onBeforeUnmount(stop);
  return { isOn, isRefused, start, stop };
}
