/**
 * Titratable acidity on its scales. Two protons each: tartaric acid 150.087 g/mol, sulphuric acid 98.079 g/mol.
 * Some laboratories report as sulphuric acid, a third less for the same juice: ask, never assume.
 */
const TARTARIC_G_PER_MOL = 150.087;
const SULPHURIC_G_PER_MOL = 98.079;

const acidityScales = [
  { id: 'tartaricGPerL', tartaricGPerL: 1 },
  { id: 'sulphuricGPerL', tartaricGPerL: TARTARIC_G_PER_MOL / SULPHURIC_G_PER_MOL },
  { id: 'meqPerL', tartaricGPerL: TARTARIC_G_PER_MOL / 2000 },
  { id: 'mmolPerL', tartaricGPerL: TARTARIC_G_PER_MOL / 1000 },
] as const;

export type AcidityScale = (typeof acidityScales)[number]['id'];

/** Example: 4.5 g/L as sulphuric → 6.886199 g/L as tartaric. */
export function convertAcidity(value: number, from: AcidityScale, to: AcidityScale): number {
  const factor = (scale: AcidityScale) => acidityScales.find(({ id }) => id === scale)!.tartaricGPerL;
  return (value * factor(from)) / factor(to);
}
