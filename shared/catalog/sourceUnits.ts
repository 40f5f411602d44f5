import type { ImportPurpose } from '../contracts/imports.ts';

export interface SourceUnit {
  readonly unit: string;
  /** Multiplies a value in this unit into the layer's own unit. */
  readonly factor: number;
}

/**
 * Units in which files bring values, and the way to the layer's own. Foot and US survey foot exact by definition;
 * 1 short ton per acre = 907.18474 kg / 4046.8564224 m²; 1 dS/m = 1 mS/cm = 100 mS/m.
 */
export const sourceUnits: Partial<Record<ImportPurpose, readonly SourceUnit[]>> = {
  elevation: [
    { unit: 'm', factor: 1 },
    { unit: 'ft', factor: 0.3048 },
    { unit: 'ftUS', factor: 1200 / 3937 },
  ],
  conductivity: [
    { unit: 'mS/m', factor: 1 },
    { unit: 'dS/m', factor: 100 },
    { unit: 'mS/cm', factor: 100 },
    { unit: 'µS/cm', factor: 0.1 },
  ],
  yield: [
    { unit: 't/ha', factor: 1 },
    { unit: 'kg/m²', factor: 10 },
    { unit: 'tonUS/ac', factor: 9.0718474 / 4.0468564224 },
  ],
};

/** Factor of a unit; 1 for purposes that take values as they are. Throws on a unit that the purpose does not know. */
export function unitFactor(purpose: ImportPurpose, unit: string | undefined): number {
  const known = sourceUnits[purpose];
  if (!known || unit === undefined) return 1;
  const found = known.find((row) => row.unit === unit);
  if (!found) throw new Error(`No unit "${unit}" for ${purpose}`);
  return found.factor;
}
