import { changeBetween, type Change } from '../sampling/change.ts';
import { exactly, multiplyEstimates } from '../sampling/combineEstimates.ts';
import type { Estimate } from '../sampling/precision.ts';

/**
 * Sugar in a berry, so that shrivel is not taken for ripening: °Brix can rise while nothing is loaded, because water
 * leaves. The whole berry is taken as juice, which overstates the amount but hardly its change. Common practice.
 */

/** mg a berry: °Brix is g per 100 g. Example: 24 °Brix, 1.25 g → 300 mg. */
export function sugarPerBerryMg(brix: Estimate, berryWeightG: Estimate): Estimate {
  return multiplyEstimates([exactly(10), brix, berryWeightG]);
}

export interface BerryState {
  readonly brix: Estimate;
  readonly berryWeightG: Estimate;
}

export type LoadingWord = 'loading' | 'concentration' | 'dilution' | 'losing' | 'notDistinguishable';

export interface LoadingChange {
  readonly word: LoadingWord;
  readonly brix: Change;
  readonly berryWeightG: Change;
  readonly sugarMg: Change;
}

/**
 * What happened between two visits: sugar came in; °Brix rose with lighter berries but no more sugar (concentration,
 * not loading); °Brix fell with heavier berries and no less sugar (dilution); sugar went; or nothing that can be told.
 */
export function loadingChange(before: BerryState, after: BerryState, confidence: number): LoadingChange {
  const brix = changeBetween(before.brix, after.brix, confidence);
  const berryWeightG = changeBetween(before.berryWeightG, after.berryWeightG, confidence);
  const sugarMg = changeBetween(sugarPerBerryMg(before.brix, before.berryWeightG), sugarPerBerryMg(after.brix, after.berryWeightG), confidence);
  return { word: loadingWord(brix, berryWeightG, sugarMg), brix, berryWeightG, sugarMg };
}

function loadingWord(brix: Change, weight: Change, sugar: Change): LoadingWord {
  if (sugar.word === 'higher') return 'loading';
  if (sugar.word === 'lower') return 'losing';
  if (brix.word === 'higher' && weight.word === 'lower') return 'concentration';
  if (brix.word === 'lower' && weight.word === 'higher') return 'dilution';
  return 'notDistinguishable';
}
