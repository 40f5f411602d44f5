import { AnalysisError } from '../analysis/analysisError.ts';

/** Units that tickets, labs and trade figures come in, as multiples of one metric unit. Exact by definition unless noted. */
export const unitFactors = {
  kg: { quantity: 'massT', factor: 0.001 },
  t: { quantity: 'massT', factor: 1 },
  lb: { quantity: 'massT', factor: 0.00045359237 },
  shortTon: { quantity: 'massT', factor: 0.90718474 },
  longTon: { quantity: 'massT', factor: 1.0160469088 },
  L: { quantity: 'volumeL', factor: 1 },
  hL: { quantity: 'volumeL', factor: 100 },
  usGal: { quantity: 'volumeL', factor: 3.785411784 },
  impGal: { quantity: 'volumeL', factor: 4.54609 },
  ha: { quantity: 'areaHa', factor: 1 },
  acre: { quantity: 'areaHa', factor: 0.40468564224 },
  tPerHa: { quantity: 'yieldTPerHa', factor: 1 },
  shortTonPerAcre: { quantity: 'yieldTPerHa', factor: 0.90718474 / 0.40468564224 },
  LPerT: { quantity: 'litresPerT', factor: 1 },
  usGalPerShortTon: { quantity: 'litresPerT', factor: 3.785411784 / 0.90718474 },
} as const;

export type UnitId = keyof typeof unitFactors;

/** Example: 1 short ton an acre → 2.2417 t/ha; 150 US gallons a short ton → 625.9 L/t. */
export function convertUnit(value: number, from: UnitId, to: UnitId): number {
  const source = unitFactors[from];
  const target = unitFactors[to];
  if (source.quantity !== target.quantity) throw new AnalysisError('unlike_units', `${from} cannot be turned into ${to}: they measure different things.`);
  return (value * source.factor) / target.factor;
}

/** Trade ratio of kilograms of grapes for a hectolitre, turned into litres a tonne. Example: 130 → 769. */
export function kgPerHlToLitresPerT(kgPerHl: number): number {
  return 100_000 / kgPerHl;
}
