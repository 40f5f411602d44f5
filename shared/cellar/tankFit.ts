import { AnalysisError } from '../analysis/analysisError.ts';
import { normalTails, studentTTails } from '../sampling/distributions.ts';
import { multiplyEstimates } from '../sampling/combineEstimates.ts';
import type { Estimate } from '../sampling/precision.ts';

/**
 * Tonnes to litres, and the chance that a lot fits a tank. Must and finished wine are two numbers with two factors and
 * often two tanks. Starting factors are common practice; the estate's own history replaces them.
 */
export interface LitreHint {
  readonly id: 'redMust' | 'whiteJuice' | 'redWine' | 'whiteWine';
  readonly lowLPerT: number;
  readonly highLPerT: number;
  /** Share of the tank left empty for cap or foam. */
  readonly headspace: { readonly low: number; readonly high: number } | null;
}

export const litreHints = [
  { id: 'redMust', lowLPerT: 850, highLPerT: 950, headspace: { low: 0.2, high: 0.3 } },
  { id: 'whiteJuice', lowLPerT: 550, highLPerT: 700, headspace: { low: 0.1, high: 0.15 } },
  { id: 'redWine', lowLPerT: 600, highLPerT: 750, headspace: null },
  // Juice less the 5 to 10 % that stays with the lees: wine can never be more than what was pressed.
  { id: 'whiteWine', lowLPerT: 500, highLPerT: 660, headspace: null },
] as const satisfies readonly LitreHint[];

/** Customary litres of a kind of wine, as must and as wine. */
export function hintFor(wineType: string, of: 'must' | 'wine'): LitreHint {
  const id = of === 'must' ? (wineType === 'red' ? 'redMust' : 'whiteJuice') : wineType === 'red' ? 'redWine' : 'whiteWine';
  return litreHints.find((hint) => hint.id === id)!;
}

/** Litres with the errors of both factors. Example: 12.4 t (se 0.765) × 800 L/t → 9920 L (se 612). */
export function litresFrom(tonnes: Estimate, litresPerTonne: Estimate): Estimate {
  return multiplyEstimates([tonnes, litresPerTonne]);
}

/** Tank that the litres need. Example: 5580 L with 20 % headspace → 6975 L. */
export function tankVolumeNeeded(litres: number, headspaceShare: number): number {
  if (!(headspaceShare >= 0 && headspaceShare < 1)) throw new AnalysisError('bad_share', `Headspace is a share from 0 to below 1; got ${headspaceShare}.`);
  return litres / (1 - headspaceShare);
}

export interface Tank {
  readonly volumeL: number;
  /** Share that may be filled, such as 0.8. */
  readonly fillShare: number;
  /** Least content the tank works with; 0 for none. */
  readonly minimumL?: number;
}

export interface TankFit {
  readonly workingL: number;
  /** Chance that the lot goes in at the working fill. */
  readonly chanceOfFit: number;
  /** Chance that the lot is less than the tank needs. */
  readonly chanceBelowMinimum: number;
  /** Litres over (positive) or room left (negative) at the expected volume. */
  readonly overL: number;
}

/** By the normal distribution, or Student's t where few readings stand behind the litres. Example: 9920 L ± 1200 (95 %) into 12 000 L at 80 % → 30 %. */
export function fitTank(litres: Estimate, { volumeL, fillShare, minimumL = 0 }: Tank): TankFit {
  if (!(volumeL > 0 && fillShare > 0 && fillShare <= 1)) throw new AnalysisError('bad_tank', `A tank needs a volume above 0 and a fill between 0 and 1; got ${volumeL} L at ${fillShare}.`);
  const workingL = volumeL * fillShare;
  const tails = (distance: number) => (Number.isFinite(litres.df) ? studentTTails(distance, litres.df) : normalTails(distance));
  const chanceBelow = (limit: number) => (litres.standardError === 0 ? (litres.value <= limit ? 1 : 0) : tails((limit - litres.value) / litres.standardError).lower);
  return { workingL, chanceOfFit: chanceBelow(workingL), chanceBelowMinimum: minimumL > 0 ? chanceBelow(minimumL) : 0, overL: litres.value - workingL };
}
