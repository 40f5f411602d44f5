import { AnalysisError } from '../analysis/analysisError.ts';
import { solidsGPerL } from './must.ts';
import { sugarOfBrix } from './mustSugar.ts';

/**
 * Potential alcohol, % by volume: what would form if all sugar fermented. Always a range with its method; never the
 * alcohol of a label. 16.83 g/L of sugar for 1 % is the convention of the EU; yeasts tested need 16.5 to 17.2 and the
 * rule of thumb is 18 (all three as commonly printed, from secondary sources); theory, two ethanol from each hexose with
 * nothing lost, is 15.43. From °Brix sugar comes by the OIV's table of must, or as all
 * solids less an allowance.
 */
export interface AlcoholSettings {
  /** % per °Brix. */
  readonly perBrix: { readonly low: number; readonly middle: number; readonly high: number };
  /** g/L of sugar for 1 %; the low figure gives the high alcohol. */
  readonly sugarPerPercent: { readonly low: number; readonly middle: number; readonly high: number };
  /** g/L of solids that do not ferment. */
  readonly otherSolidsGPerL: number;
}

export const ALCOHOL_SETTINGS: AlcoholSettings = {
  perBrix: { low: 0.55, middle: 0.59, high: 0.62 },
  sugarPerPercent: { low: 16.5, middle: 16.83, high: 18 },
  otherSolidsGPerL: 30,
};

/** Sugar as it is known: °Brix with its limits, or sugar by analysis with its limits (equal when taken as exact). */
export interface SugarRange {
  readonly lower: number;
  readonly value: number;
  readonly upper: number;
}

export type AlcoholMethodId = 'brixFactor' | 'sugarTable' | 'solidsLessAllowance' | 'measuredSugar';

export interface PotentialAlcohol {
  readonly method: AlcoholMethodId;
  readonly low: number;
  readonly middle: number;
  readonly high: number;
}

interface AlcoholMethod {
  readonly id: AlcoholMethodId;
  readonly from: 'brix' | 'sugarGPerL';
  readonly percent: (sugar: number, settings: AlcoholSettings, which: 'low' | 'middle' | 'high') => number;
}

/** Which figure of sugar per percent makes the alcohol low, middle or high. */
const OPPOSITE = { low: 'high', middle: 'middle', high: 'low' } as const;

const alcoholMethods = [
  { id: 'measuredSugar', from: 'sugarGPerL', percent: (sugar, settings, which) => sugar / settings.sugarPerPercent[OPPOSITE[which]] },
  { id: 'sugarTable', from: 'brix', percent: (brix, settings, which) => sugarOfBrix(brix) / settings.sugarPerPercent[OPPOSITE[which]] },
  { id: 'solidsLessAllowance', from: 'brix', percent: (brix, settings, which) => Math.max(0, solidsGPerL(brix) - settings.otherSolidsGPerL) / settings.sugarPerPercent[OPPOSITE[which]] },
  { id: 'brixFactor', from: 'brix', percent: (brix, settings, which) => brix * settings.perBrix[which] },
] as const satisfies readonly AlcoholMethod[];

/**
 * The range spans both the sugar's own limits and the method's. Example: 24 °Brix exactly, by factor → 13.20, 14.16,
 * 14.88; 240 g/L measured → 14.26 in the middle.
 */
export function potentialAlcohol(sugar: SugarRange, method: AlcoholMethodId, settings = ALCOHOL_SETTINGS): PotentialAlcohol {
  if (!(sugar.lower <= sugar.value && sugar.value <= sugar.upper)) {
    throw new AnalysisError('bad_range', `The sugar must lie within its limits; got ${sugar.value} in ${sugar.lower} to ${sugar.upper}.`);
  }
  const { percent } = alcoholMethods.find(({ id }) => id === method)!;
  return {
    method,
    low: percent(Math.max(0, sugar.lower), settings, 'low'),
    middle: percent(sugar.value, settings, 'middle'),
    high: percent(sugar.upper, settings, 'high'),
  };
}
