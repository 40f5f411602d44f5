import { ref } from 'vue';
import { readStored, writeStored } from '../lib/deviceStore.ts';

const isLoud = ref(readStored<boolean>('fieldSound') ?? true);
let context: AudioContext | null = null;
let isListening = false;

/** Answers of the phone to a tap that can be felt and heard with gloves on: kept, or asks something. */
export function useFeedback(): { isLoud: typeof isLoud; kept: () => void; asks: () => void; toggleSound: () => void } {
  listenForTaps();
  return {
    isLoud,
    kept: () => answer(40, [880]),
    asks: () => answer([60, 60, 60], [440, 440]),
    toggleSound: () => {
      isLoud.value = !isLoud.value;
      writeStored('fieldSound', isLoud.value);
    },
  };
}

function answer(pattern: number | number[], tones: readonly number[]): void {
  navigator.vibrate?.(pattern);
  if (isLoud.value && context) tones.forEach((hertz, place) => beep(context!, hertz, place * 0.14));
}

/** Some browsers let a page sound only if it was begun while a finger tapped, and stop it when the phone sleeps: the answer comes after the store has taken the entry, which is too late. */
function listenForTaps(): void {
  if (isListening || typeof AudioContext === 'undefined') return;
  isListening = true;
  for (const act of ['click', 'keydown']) document.addEventListener(act, wake, { capture: true, passive: true });
}

function wake(): void {
  if (!isLoud.value) return;
  context ??= new AudioContext();
  if (context.state !== 'running') void context.resume().catch(() => undefined);
}

/** A short tone that swells and fades, so that the loudspeaker does not click. */
function beep(audio: AudioContext, hertz: number, afterS: number): void {
  const [start, lengthS] = [audio.currentTime + afterS, 0.09];
  const [tone, volume] = [audio.createOscillator(), audio.createGain()];
  tone.frequency.value = hertz;
  volume.gain.setValueAtTime(0, start);
  volume.gain.linearRampToValueAtTime(0.25, start + 0.01);
  volume.gain.linearRampToValueAtTime(0, start + lengthS);
  tone.connect(volume).connect(audio.destination);
  tone.start(start);
  tone.stop(start + lengthS);
}
