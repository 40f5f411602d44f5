/**
 * Sugar of grape must in g/L by refractometer, from 10 % by mass as sucrose (°Brix) in steps of one: table II of OIV method
 * OIV-MA-AS2-02 (Oeno 21/2004), as reproduced in annex IV of the French order of 14 September 2011 on refractometers. Acids
 * and the other solids of must are not in it, hence some 25 g/L less than everything dissolved.
 */
const firstBrix = 10;
const sugarGPerL = [82.2, 92.8, 103.5, 114.3, 125.2, 136.1, 147.1, 158.2, 169.4, 180.6, 191.9, 203.3, 214.7, 226.2, 237.8, 249.5, 261.2, 273.0, 284.9, 296.9, 308.9];

/** Sugar in g/L of a must by its °Brix; beyond the table its first and last steps go on. `sugarOfBrix(24)` is 237.8. */
export function sugarOfBrix(brix: number): number {
  const at = Math.min(sugarGPerL.length - 2, Math.max(0, Math.floor(brix - firstBrix)));
  const [low, high] = [sugarGPerL[at]!, sugarGPerL[at + 1]!];
  return Math.max(0, low + (brix - firstBrix - at) * (high - low));
}

/** °Brix of a must with so much sugar; NaN outside the table. `brixOfSugar(237.8)` is 24. */
export function brixOfSugar(gPerL: number): number {
  const above = sugarGPerL.findIndex((sugar) => sugar >= gPerL);
  if (above === 0) return gPerL === sugarGPerL[0] ? firstBrix : Number.NaN;
  if (above < 0) return Number.NaN;
  const [low, high] = [sugarGPerL[above - 1]!, sugarGPerL[above]!];
  return firstBrix + above - 1 + (gPerL - low) / (high - low);
}
