import { labUnit } from '../units.ts';
import type { LabMeasure } from './labFile.ts';

/** A figure in the measure's own unit; NaN where it cannot be in the unit it was taken for. */
export function inOwnUnit(unit: string, value: number): number {
  return labUnit(unit)?.convert(value) ?? value;
}

/** A little beyond the measure's usual range: wide enough for any vintage, narrow enough to tell units and lost marks. */
export function isPlausible(measure: LabMeasure, unit: string, value: number): boolean {
  const own = inOwnUnit(unit, value);
  return own >= 0.8 * measure.minimum && own <= measure.maximum + (measure.maximum - measure.minimum) / 4;
}

export function isUsual(measure: LabMeasure, own: number): boolean {
  return own >= measure.minimum && own <= measure.maximum;
}
