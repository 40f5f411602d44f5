import { convertAcidity } from '../cellar/acidity.ts';
import { brixOfSugar } from '../cellar/mustSugar.ts';
import { baumeToGravity, gravityToBrix, klosterneuburgToOechsle, oechsleToGravity, solidsGPerL } from '../cellar/must.ts';

/**
 * Units in which laboratories write what an estate keeps in one unit: °Brix for sugar, g/L as tartaric acid for titratable
 * acidity. The first row of a measure is its own unit. Conversions are those of `shared/cellar`, at 20 °C.
 */
export interface LabUnit {
  readonly id: string;
  readonly measure: string;
  /** As it is written beside a figure. */
  readonly shown: string;
  /** NaN where the figure cannot be in this unit. */
  readonly convert: (value: number) => number;
}

const same = (value: number) => value;

const labUnits: readonly LabUnit[] = [
  { id: 'brix', measure: 'brix', shown: '°Brix', convert: same },
  { id: 'baume', measure: 'brix', shown: '°Bé', convert: (value) => brixOfGravity(baumeToGravity(value)) },
  { id: 'oechsle', measure: 'brix', shown: '°Oe', convert: (value) => brixOfGravity(oechsleToGravity(value)) },
  { id: 'kmw', measure: 'brix', shown: '°KMW', convert: (value) => brixOfGravity(oechsleToGravity(klosterneuburgToOechsle(value))) },
  // Written as 1.092, or as 1092 kg a cubic metre without the mark.
  { id: 'gravity', measure: 'brix', shown: 'SG', convert: (value) => brixOfGravity(value > 900 ? value / 1000 : value) },
  { id: 'solidsGPerL', measure: 'brix', shown: 'g/L', convert: brixOfSolids },
  // What laboratories of wine countries write as sugar: without acids and the other solids.
  { id: 'sugarGPerL', measure: 'brix', shown: 'g/L', convert: brixOfSugar },
  { id: 'tartaricGPerL', measure: 'ta', shown: 'g/L', convert: same },
  { id: 'tartaricGPer100mL', measure: 'ta', shown: 'g/100 mL', convert: (value) => value * 10 },
  { id: 'sulphuricGPerL', measure: 'ta', shown: 'g/L H2SO4', convert: (value) => convertAcidity(value, 'sulphuricGPerL', 'tartaricGPerL') },
  { id: 'meqPerL', measure: 'ta', shown: 'meq/L', convert: (value) => convertAcidity(value, 'meqPerL', 'tartaricGPerL') },
  { id: 'mmolPerL', measure: 'ta', shown: 'mmol/L', convert: (value) => convertAcidity(value, 'mmolPerL', 'tartaricGPerL') },
  { id: 'mgNPerL', measure: 'yan', shown: 'mg/L', convert: same },
  { id: 'gNPerL', measure: 'yan', shown: 'g/L', convert: (value) => value * 1000 },
  { id: 'malicGPerL', measure: 'malic', shown: 'g/L', convert: same },
  { id: 'malicMgPerL', measure: 'malic', shown: 'mg/L', convert: (value) => value / 1000 },
  { id: 'gPerBerry', measure: 'berryWeight', shown: 'g', convert: same },
  { id: 'gPer100Berries', measure: 'berryWeight', shown: 'g / 100', convert: (value) => value / 100 },
  { id: 'gPerCluster', measure: 'clusterWeight', shown: 'g', convert: same },
  { id: 'kgPerCluster', measure: 'clusterWeight', shown: 'kg', convert: (value) => value * 1000 },
  { id: 'kgPruned', measure: 'pruningWeight', shown: 'kg', convert: same },
  { id: 'gPruned', measure: 'pruningWeight', shown: 'g', convert: (value) => value / 1000 },
  { id: 'kgPicked', measure: 'yieldPerVine', shown: 'kg', convert: same },
  { id: 'gPicked', measure: 'yieldPerVine', shown: 'g', convert: (value) => value / 1000 },
];

/** Units of a measure, its own first; a measure without rows here has none but its own. */
export function unitsOf(measure: string): readonly LabUnit[] {
  return labUnits.filter((unit) => unit.measure === measure);
}

export function labUnit(id: string): LabUnit | null {
  return labUnits.find((unit) => unit.id === id) ?? null;
}

/** Example: 240 g/L of dissolved solids → 22.02 °Brix, the inverse of `solidsGPerL`. */
function brixOfSolids(value: number): number {
  let [low, high] = [0, 60];
  if (!(value >= 0 && value <= solidsGPerL(high))) return Number.NaN;
  for (let step = 0; step < 60; step++) {
    const middle = (low + high) / 2;
    if (solidsGPerL(middle) < value) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

function brixOfGravity(gravity: number): number {
  return gravity >= 1 && gravity < 1.28 ? gravityToBrix(gravity) : Number.NaN;
}
