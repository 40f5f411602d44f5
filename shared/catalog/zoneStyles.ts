/**
 * How zones look on screen and on paper. Colour never stands alone: a zone also has a number and a pattern.
 * Ordered set sampled from tokyo (Crameri, Scientific colour maps, 2020); unordered set Okabe & Ito, Color Universal Design.
 */
export type ColourSet = 'ordered' | 'unordered';
export const patterns = ['plain', 'diagonal', 'dots', 'cross', 'backDiagonal', 'horizontal'] as const;
export type Pattern = (typeof patterns)[number];

export const unorderedColours: readonly string[] = ['#56B4E9', '#D55E00', '#F0E442', '#0072B2', '#CC79A7', '#009E73'];

/** Low to high, k = 2 to 5 as sampled from tokyo; k = 1 is its middle, k = 6 interpolated between its seven stops. */
const ordered: Record<number, readonly string[]> = {
  1: ['#747053'],
  2: ['#1C0E34', '#EFFCDD'],
  3: ['#1C0E34', '#747053', '#EFFCDD'],
  4: ['#1C0E34', '#705751', '#7C9859', '#EFFCDD'],
  5: ['#1C0E34', '#6C4750', '#747053', '#87B666', '#EFFCDD'],
  6: ['#1C0E34', '#613849', '#726152', '#7A8857', '#9BCB7E', '#EFFCDD'],
};

export interface ZoneStyle {
  readonly fill: string;
  readonly pattern: Pattern;
  /** Colour of pattern marks and vine ticks on the fill. */
  readonly mark: string;
}

export interface ZoneStyleOptions {
  readonly set?: ColourSet;
  /** Highest zone number of the block (`zoneSpan`); the ordered set needs it. */
  readonly count: number;
  /** Colours that people gave zones, by zone number. */
  readonly own?: Readonly<Record<number, string>>;
}

/** Fill, pattern and mark colour of a zone. `zone` counts from 1; past 6 the six styles repeat. */
export function zoneStyle(zone: number, { set = 'ordered', count, own = {} }: ZoneStyleOptions): ZoneStyle {
  const place = (zone - 1) % 6;
  const palette = set === 'unordered' ? unorderedColours : ordered[Math.min(6, Math.max(1, count))]!;
  const fill = own[zone] ?? palette[place % palette.length]!;
  return { fill, pattern: patterns[place]!, mark: markOn(fill) };
}

/**
 * Highest number among the zones of a block. Colours go by it and not by how many zones there are: where zones were joined a number
 * is missing, and the rest keep their colours and their order from low to high.
 */
export function zoneSpan(zones: readonly { readonly number: number }[]): number {
  return Math.max(0, ...zones.map(({ number }) => number));
}

/** Ink on light fills, chalk on dark ones. The threshold is the luminance where both have equal contrast. */
export function markOn(fill: string): string {
  return luminance(fill) > 0.2 ? '#1C2B33' : '#F6F4EE';
}

/** Relative luminance of a hex colour (WCAG 2.2, definition of relative luminance). */
export function luminance(hex: string): number {
  const [red, green, blue] = channels(hex).map((value) => {
    const share = value / 255;
    return share <= 0.04045 ? share / 12.92 : ((share + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * red! + 0.7152 * green! + 0.0722 * blue!;
}

/** Red, green, blue, 0–255, of a hex colour. */
export function channels(hex: string): [number, number, number] {
  return [1, 3, 5].map((at) => Number.parseInt(hex.slice(at, at + 2), 16)) as [number, number, number];
}
