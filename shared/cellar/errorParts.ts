/**
 * Where the error of a tonnes forecast came from: each factor that was measured again later takes its share, what is
 * left cannot be told apart. Shares are by logarithms, so that they add up to the whole error exactly and no factor is
 * favoured by its place (additive log-mean Divisia index, Ang 2005, Energy Policy 33:867). Never about people.
 */
const ERROR_PARTS = ['vines', 'clusters', 'clusterWeight', 'growth', 'losses'] as const;
export type ErrorPart = (typeof ERROR_PARTS)[number];

export interface ErrorQuestion {
  readonly forecastT: number;
  readonly actualT: number;
  /** Factor as found later over factor as forecast; a part that nobody measured again is left out. */
  readonly ratios: Partial<Record<ErrorPart, number>>;
}

export interface ErrorShare {
  readonly part: ErrorPart | 'rest';
  /** Tonnes of actual − forecast that it explains; may run against the whole. */
  readonly tonnes: number;
}

/** Example: forecast 10 t, actual 12 t, 8 % more clusters than forecast → clusters 0.844 t, rest 1.156 t. */
export function errorParts({ forecastT, actualT, ratios }: ErrorQuestion): ErrorShare[] {
  if (!(forecastT > 0 && actualT > 0)) return [];
  const mean = logarithmicMean(actualT, forecastT);
  const known = ERROR_PARTS.flatMap((part) => {
    const ratio = ratios[part];
    return ratio !== undefined && ratio > 0 ? [{ part, tonnes: mean * Math.log(ratio) }] : [];
  });
  const rest = actualT - forecastT - known.reduce((sum, { tonnes }) => sum + tonnes, 0);
  return [...known, { part: 'rest' as const, tonnes: rest }].sort((a, b) => Math.abs(b.tonnes) - Math.abs(a.tonnes));
}

/** (a − b)/(ln a − ln b), a when both are alike. */
function logarithmicMean(a: number, b: number): number {
  return Math.abs(a - b) < 1e-12 * a ? a : (a - b) / (Math.log(a) - Math.log(b));
}
