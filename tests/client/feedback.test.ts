import { afterEach, expect, it, vi } from 'vitest';

afterEach(() => {
  vi.unstubAllGlobals();
  vi.resetModules();
});

/** Sound that starts asleep and wakes only within a tap, as on phones that ask for one. */
function sleepyAudio() {
  const made: { state: string; resumed: number; tones: number }[] = [];
  class Audio {
    state = 'suspended';
    resumed = 0;
    tones = 0;
    currentTime = 0;
    destination = {};
    constructor() {
      made.push(this);
    }
    resume() {
      [this.state, this.resumed] = ['running', this.resumed + 1];
      return Promise.resolve();
    }
    createOscillator() {
      this.tones++;
      return { frequency: { value: 0 }, connect: (next: unknown) => next, start: () => undefined, stop: () => undefined };
    }
    createGain() {
      const ramp = { setValueAtTime: () => undefined, linearRampToValueAtTime: () => undefined };
      return { gain: ramp, connect: (next: unknown) => next };
    }
  }
  vi.stubGlobal('AudioContext', Audio);
  return made;
}

it('sound is woken by the tap itself, also after the phone slept, and its answer comes later', async () => {
  const made = sleepyAudio();
  const { useFeedback } = await import('../../src/composables/useFeedback.ts');
  const feedback = useFeedback();
  feedback.kept();
  expect(made).toHaveLength(0);
  document.body.click();
  expect(made).toMatchObject([{ state: 'running', resumed: 1 }]);
  await Promise.resolve();
  feedback.kept();
  expect(made[0]!.tones).toBe(1);
  made[0]!.state = 'interrupted';
  document.body.click();
  expect(made).toMatchObject([{ state: 'running', resumed: 2 }]);
});
