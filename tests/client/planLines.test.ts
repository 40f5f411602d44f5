import { describe, expect, it } from 'vitest';
import { decidingSpread, measureLines, spreadEvidence } from '../../src/components/sampling/planLines.ts';
import type { BasisMeasure, PlanBasis } from '../../shared/contracts/planBasis.ts';
import type { PlanChoices } from '../../shared/contracts/planChoices.ts';
import type { PlanAnswer } from '../../shared/sampling/plan.ts';

const found = (value: number) => ({ kind: 'cv', value, cautious: value, source: 'trade', n: 0, seasons: [], df: null, outliers: 2, withOutliers: null, withoutOutliers: null, expectedMean: 20, isMeanAssumed: false });
const measure = { code: 'clusterCount', unit: 'clusters', decimals: 0, spreads: [found(0.25), found(0.3)], pilots: [{ n: 10, df: 9, spread: 0.41, mean: 21 }, null] } as unknown as BasisMeasure;
const basis = { zones: [{ number: 1 }, { number: 2 }], measures: [measure] } as unknown as PlanBasis;
const choices = (spreads?: Record<string, number>) => ({ measures: [{ code: 'clusterCount', spreads }] }) as unknown as PlanChoices;
const answer = (pilots?: unknown[]) => ({ question: { measures: [{ code: 'clusterCount', pilots }] }, counts: { measures: [], drivers: [] } }) as unknown as PlanAnswer;
const words = { ofMean: '% spread' };

describe('the spread shown beside a count', () => {
  it('is the one that decides: typed, else the pilot’s where its rule is taken, else what was found', () => {
    const of = (typed: number | undefined, pilots: unknown[] | undefined) => { const { value, source, n } = decidingSpread(measure, 0, { typed, pilots }); return [value, source, n]; };
    expect(of(undefined, undefined)).toEqual([0.25, 'trade', 0]);
    expect(of(undefined, measure.pilots as unknown[])).toEqual([0.41, 'pilot', 10]);
    expect(of(0.5, [null, null])).toEqual([0.5, 'typed', 0]);
  });

  it('of a measure is the widest of its zones, with its own source', () => {
    const line = (spreads?: Record<string, number>, pilots?: unknown[]) => { const [{ spread }] = measureLines(basis, choices(spreads), answer(pilots)) as [ReturnType<typeof measureLines>[number]]; return [spread.value, spread.source]; };
    expect(line()).toEqual([0.3, 'trade']);
    expect(line(undefined, measure.pilots as unknown[])).toEqual([0.41, 'pilot']);
    expect(line({ 2: 0.6 }, [measure.pilots[0], null])).toEqual([0.6, 'typed']);
  });

  it('is measured with its range of a pilot, and assumed where somebody typed it', () => {
    const pilot = spreadEvidence(decidingSpread(measure, 0, { typed: undefined, pilots: measure.pilots as unknown[] }), measure, words);
    expect(pilot).toMatchObject({ value: 41, n: 10, confidence: 0.95, kind: 'measured' });
    expect(pilot.low).toBeLessThan(41);
    expect(spreadEvidence(decidingSpread(measure, 0, { typed: 0.5, pilots: undefined }), measure, words)).toMatchObject({ value: 50, n: null, confidence: null, kind: 'assumed' });
  });
});
