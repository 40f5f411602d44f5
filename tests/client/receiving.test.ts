import { describe, expect, it } from 'vitest';
import { useReceiving } from '../../src/composables/useReceiving.ts';

type Send = Parameters<typeof useReceiving>[0];

/** A server that answers only when told. */
function slowServer() {
  const asked: { codes: readonly string[]; answer: (works: boolean) => void }[] = [];
  const send: Send = (codes) => new Promise((resolve) => asked.push({ codes, answer: (works) => resolve(works ? codes.map((code) => ({ code, state: 'here' as const })) : null) }));
  return { asked, send };
}
const settle = () => new Promise((next) => setTimeout(next, 0));

describe('labels that come faster than the server answers', () => {
  it('wait for nobody and go together, each once', async () => {
    const { asked, send } = slowServer();
    const receiving = useReceiving(send);
    void receiving.add(['A']);
    for (const code of ['B', 'C', 'C']) void receiving.add([code]);
    expect(asked.map(({ codes }) => codes)).toEqual([['A']]);
    asked[0]!.answer(true);
    await settle();
    expect(asked.map(({ codes }) => codes)).toEqual([['A'], ['B', 'C']]);
    asked[1]!.answer(true);
    await settle();
    expect(receiving.waiting.value).toEqual([]);
    expect(receiving.last.value.map(({ code }) => code)).toEqual(['C', 'B', 'A']);
  });

  it('stay when the line was lost, and go with the next', async () => {
    const { asked, send } = slowServer();
    const receiving = useReceiving(send);
    void receiving.add(['A']);
    void receiving.add(['B']);
    asked[0]!.answer(false);
    await settle();
    expect(receiving.waiting.value).toEqual(['A', 'B']);
    void receiving.add(['D']);
    expect(asked[1]!.codes).toEqual(['A', 'B', 'D']);
  });
});
