/** Stored in SI and metric, shown in the system a person chose. Factors: NIST SP 811 (2008), Appendix B. */
export type UnitSystem = 'metric' | 'us';

const quantities = {
  area: { metric: ['ha', 1, 2], us: ['ac', 2.4710538, 2] },
  length: { metric: ['m', 1, 1], us: ['ft', 3.2808399, 1] },
  distance: { metric: ['km', 1, 1], us: ['mi', 0.62137119, 1] },
  fruitMass: { metric: ['t', 1, 1], us: ['short tons', 1.1023113, 1] },
  mass: { metric: ['kg', 1, 2], us: ['lb', 2.2046226, 2] },
  yield: { metric: ['t/ha', 1, 1], us: ['tons/ac', 0.44609, 1] },
  volume: { metric: ['L', 1, 0], us: ['US gal', 0.26417205, 0] },
  juice: { metric: ['L/t', 1, 0], us: ['US gal/ton', 0.23965, 0] },
  temperature: { metric: ['°C', 1, 0], us: ['°F', 1.8, 0] },
} as const satisfies Record<string, Record<UnitSystem, readonly [unit: string, factor: number, decimals: number]>>;

export type Quantity = keyof typeof quantities;

/** Units that are words and not symbols, of quantities and of measures; the key is the English. */
const unitWords: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  'short tons': { es: 't cortas', fr: 't courtes', it: 't corte', pt: 't curtas' },
  'tons/ac': { es: 't cortas/ac', fr: 't courtes/ac', it: 't corte/ac', pt: 't curtas/ac' },
  'US gal': { es: 'gal EE. UU.', fr: 'gal US', it: 'gal US', pt: 'gal EUA' },
  'US gal/ton': { es: 'gal EE. UU./t corta', fr: 'gal US/t courte', it: 'gal US/t corta', pt: 'gal EUA/t curta' },
  clusters: { es: 'racimos', fr: 'grappes', it: 'grappoli', pt: 'cachos' },
  berries: { es: 'bayas', fr: 'baies', it: 'acini', pt: 'bagos' },
};

/** A unit as a language writes it; symbols are the same in all. */
export const unitWord = (unit: string, language: string): string => unitWords[unit]?.[language] ?? unit;

const freezingF = 32;

/** Value as shown: `shownValue('area', 1, 'us')` is 2.4710538. */
export function shownValue(quantity: Quantity, stored: number, system: UnitSystem): number {
  const value = stored * quantities[quantity][system][1];
  return quantity === 'temperature' && system === 'us' ? value + freezingF : value;
}

/** Value as stored, from what a person typed. */
export function storedValue(quantity: Quantity, shown: number, system: UnitSystem): number {
  const value = quantity === 'temperature' && system === 'us' ? shown - freezingF : shown;
  return value / quantities[quantity][system][1];
}

/** Name of the unit in a language. `unitOf('fruitMass', 'us', 'fr')` is "t courtes". */
export function unitOf(quantity: Quantity, system: UnitSystem, language: string): string {
  return unitWord(quantities[quantity][system][0], language);
}

export function decimalsOf(quantity: Quantity, system: UnitSystem): number {
  return quantities[quantity][system][2];
}
