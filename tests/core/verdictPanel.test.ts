import { describe, expect, it } from 'vitest';
import { judgedPanel } from '../bench/judgedPanel.ts';
import { noiseKinds, slopeKinds } from '../bench/simulatedBlock.ts';

/**
 * A small part of the panel that `npm run bench -- --verdict` judges in full. With a true rate of 97.5 % one of fifteen
 * blocks may go wrong (chance of two or more: 5 %); seeds are fixed, so the outcome is too.
 */
describe('the verdict on simulated blocks of 2 ha', () => {
  const count = 5;
  const panel = { areaHa: 2, cellSizeM: 3, count, firstSeed: 100 };

  it('treats noise as one', () => {
    const verdicts = noiseKinds.flatMap((kind) => judgedPanel({ ...panel, kind }).map(({ verdict }) => verdict));
    expect(verdicts.filter((verdict) => verdict !== 'one').length).toBeLessThanOrEqual(1);
  });

  it('finds smooth slopes worth testing', () => {
    const verdicts = slopeKinds.flatMap((kind) => judgedPanel({ ...panel, kind }).map(({ verdict }) => verdict));
    expect(verdicts.filter((verdict) => verdict !== 'test').length).toBeLessThanOrEqual(1);
  });

  it('never treats real zones as one, and is near their number', () => {
    const judged = judgedPanel({ ...panel, kind: 'zones', count: 15 });
    expect(judged.filter(({ verdict }) => verdict === 'one')).toEqual([]);
    expect(judged.filter(({ advisedK, trueK }) => Math.abs(advisedK - trueK) <= 1).length).toBeGreaterThanOrEqual(11);
  });
});
