import type { Conversion } from '../../../shared/sampling/maths.ts';
import type { Format } from '../../lib/format.ts';

/** How the numbers of a formula are written: four figures that count, which is enough to follow it on a calculator. */
export interface MathsFigures {
  figure: (value: number) => string;
  percent: (share: number) => string;
  /** f of n/N or 1/N as it stands in a formula: not at all where it is 1. */
  times: (finiteShare: number) => string;
  sign: (halfWidth: number, margin: number) => '≤' | '>';
  /** "s = 25 % · 21.3 = 5.325": how spread or margin came from a share of the mean to the unit. */
  converted: (conversion: Conversion) => string;
}

const places = (value: number) => (value === 0 ? 0 : Math.min(8, Math.max(0, 3 - Math.floor(Math.log10(Math.abs(value))))));

export function mathsFigures(format: Pick<Format, 'number'>): MathsFigures {
  const figure = (value: number) => (Number.isNaN(value) ? '–' : value === Infinity ? '∞' : format.number(value, places(value)));
  const percent = (share: number) => `${figure(share * 100)} %`;
  return {
    figure,
    percent,
    times: (finiteShare) => (finiteShare === 1 ? '' : `${figure(finiteShare)} · `),
    sign: (halfWidth, margin) => (halfWidth <= margin * (1 + 1e-9) ? '≤' : '>'),
    converted: ({ of, share, mean }) => `${of === 'spread' ? 's' : 'E'} = ${percent(share)} · ${figure(mean)} = ${figure(share * mean)}`,
  };
}
