import { describe, expect, it } from 'vitest';
import { randomNormal, seededRandom } from '../../shared/analysis/random.ts';
import { dependent } from '../../shared/cellar/dependent.ts';
import { lotValue } from '../../shared/cellar/lots.ts';
import { intervalOf } from '../../shared/sampling/precision.ts';
import { summarise } from '../../shared/sampling/variances.ts';

/**
 * How often a lot's 95 % range holds the truth when everything in it is estimated from samples: values, tonnes, and one
 * growth factor that is wrong for all zones at once. The range is wider than one with a known spread, as it must be.
 */
interface Truth { readonly tonnes: number; readonly brix: number; readonly samples: number; readonly tonnesCv?: number; readonly counts?: number }
const [seasons, vineSd, growthError] = [4000, 0.9, 0.15];

function share(zones: readonly Truth[], seed: number): number {
  const random = seededRandom(seed);
  const normal = () => randomNormal(random);
  const total = zones.reduce((sum, { tonnes }) => sum + tonnes, 0);
  const truth = zones.reduce((sum, { tonnes, brix }) => sum + (tonnes * brix) / total, 0);
  let held = 0;
  for (let season = 0; season < seasons; season++) {
    const growth = 1 + growthError * normal();
    const parts = zones.map(({ tonnes, brix, samples, tonnesCv = 0.1, counts = 8 }, at) => {
      const values = summarise(Array.from({ length: samples }, () => brix + vineSd * normal()));
      const counted = summarise(Array.from({ length: counts }, () => tonnes * (1 + tonnesCv * Math.sqrt(counts) * normal())));
      const expected = Math.max(0.1, counted.mean) * growth;
      const own = { standardError: (counted.sd / Math.sqrt(counts)) * growth, df: counts - 1 };
      return { zone: String(at), areaHa: 1, tonnes: dependent(expected, [own], { growth: { standardError: expected * growthError, df: Infinity } }), value: { value: values.mean, standardError: values.sd / Math.sqrt(samples), df: samples - 1 } };
    });
    const { lower, upper } = intervalOf(lotValue(parts), 0.95);
    if (truth >= lower && truth <= upper) held += 1;
  }
  return held / seasons;
}

describe('the range of a lot', () => {
  // Twice the simulation's own error is 0.7 points; with three samples a zone Satterthwaite's degrees of freedom are known to be cautious.
  it.each<[string, Truth[]]>([
    ['two zones alike', [{ tonnes: 8, brix: 24, samples: 12 }, { tonnes: 15, brix: 24, samples: 12 }]],
    ['two zones apart', [{ tonnes: 8, brix: 24, samples: 7 }, { tonnes: 15, brix: 22.5, samples: 7 }]],
    ['far apart, tonnes hardly known', [{ tonnes: 8, brix: 25, samples: 12, tonnesCv: 0.2, counts: 5 }, { tonnes: 15, brix: 22, samples: 12, tonnesCv: 0.2, counts: 5 }]],
    ['five zones', [1, 2, 3, 4, 5].map((step) => ({ tonnes: 4 + step, brix: 21 + step / 2, samples: 8 }))],
    ['three zones of three samples', [{ tonnes: 8, brix: 24, samples: 3 }, { tonnes: 15, brix: 24, samples: 3 }, { tonnes: 10, brix: 23, samples: 3 }]],
  ])('holds in 94 to 97 of 100 lots: %s', (_, zones) => {
    const held = share(zones, 5);
    expect(held).toBeGreaterThan(0.94);
    expect(held).toBeLessThan(0.97);
  });
});
