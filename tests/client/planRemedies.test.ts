import { ref } from 'vue';
import { describe, expect, it } from 'vitest';
import type { PlanBasis } from '../../shared/contracts/planBasis.ts';
import { planChoices } from '../../shared/contracts/planChoices.ts';
import { answerPlan } from '../../shared/sampling/plan.ts';
import { usePlanChoices } from '../../src/composables/usePlanChoices.ts';

const measure = (code: string, spreads: readonly number[]): PlanBasis['measures'][number] => ({
  code, name: '', unit: '°Brix', decimals: 1, margin: 0.5, marginKind: 'absolute', confidence: 0.95, secondsPerSample: 60, skewed: false, measuredIn: 'lab', sampledUnit: 'vine', rowSide: 'either', tradeSource: '',
  spreads: spreads.map((value, i) => ({ kind: 'sd', value, cautious: value * 1.2, source: 'trade', n: 0, seasons: [], df: null, outliers: 0, withOutliers: null, withoutOutliers: null, expectedMean: 20 + i / 4, isMeanAssumed: true })),
  pilots: [null, null, null],
});
const basis: PlanBasis = {
  zoningId: '', zoningNumber: 1, blockId: '', blockName: '', seasonId: '', seasonName: '', pilot: null,
  zones: [900, 600, 300].map((vines, i) => ({ id: '', number: i + 1, name: '', colour: null, vines, eligible: vines - 40 })),
  measures: [measure('brix', [1.1, 0.8, 1.5]), measure('ta', [0.9, 1.2, 0.7])],
  walks: [{ vines: 6, levelS: 900, slopedS: 1000 }, { vines: 90, levelS: 3000, slopedS: 3200 }], isWalkLaid: false,
  settings: { floorVines: 5, impracticalSamples: 60, dayHours: 8, costPerHour: 20, currency: 'EUR' },
};

describe('what would help where a plan asks for too much', () => {
  // Pooling saves nothing where only the mean of the block must be known, and is not offered then.
  const offered = { eachZone: ['widerMargin', 'lowerConfidence', 'poolZones'], block: ['widerMargin', 'lowerConfidence'] } as const;
  for (const question of ['eachZone', 'block'] as const)
    for (const kind of offered[question])
      it(`${kind} gives what it promises when it is taken, for ${question}`, () => {
        // Sugar asks for 99 % and acidity for 90 %: a lower level must not make the second surer than it was.
        const asked = planChoices.parse({ measures: [{ code: 'brix', margin: 0.2, confidence: 0.99 }, { code: 'ta', margin: 0.12, confidence: 0.9 }], question, limits: { visitsPerZone: 40 } });
        const option = answerPlan(basis, asked).advice!.options.find((each) => each.kind === kind)!;
        const choices = ref(asked);
        usePlanChoices(ref(basis), choices).takeAdvice(option);
        const { counts } = answerPlan(basis, choices.value);
        expect(counts.visits).toBe(option.visits);
        expect(counts.hours).toBeCloseTo(option.hours, 9);
        expect(choices.value.measures[1]!.confidence).toBe(0.9);
      });
});
