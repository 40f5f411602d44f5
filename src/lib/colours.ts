import type { RampName } from '../../shared/catalog/layerTypes.ts';

/**
 * Colours of zones and of layer values. Colour never stands alone: a zone also has a number and a pattern.
 * Unordered set: Okabe & Ito, Color Universal Design. Ramps: sampled from Crameri, Scientific colour maps (2020):
 * tokyo, lajolla, bamako, lipari, vik.
 */
export type ColourSet = 'ordered' | 'unordered';
export const patterns = ['plain', 'diagonal', 'dots', 'cross', 'backDiagonal', 'horizontal'] as const;
export type Pattern = (typeof patterns)[number];

const unordered = ['#56B4E9', '#D55E00', '#F0E442', '#0072B2', '#CC79A7', '#009E73'];

const ramps: Record<RampName, readonly string[]> = {
  vigour: ['#1C0E34', '#5D304A', '#705751', '#747053', '#7C9859', '#A2D887', '#EFFCDD'],
  conductivity: ['#191900', '#442817', '#8F403D', '#D9604E', '#E79452', '#F2C85D', '#FFFECB'],
  terrain: ['#003B47', '#16483A', '#365E26', '#637A0A', '#988D03', '#D0B74A', '#FFE5AD'],
  ripeness: ['#031326', '#294B70', '#6B5F76', '#A56267', '#E57B62', '#E5B488', '#FDF5DA'],
  difference: ['#001261', '#06548B', '#71A8C4', '#ECE5E0', '#D39774', '#AB4814', '#590008'],
  classes: unordered,
};

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
  /** How many zones the block has; the ordered set needs it. */
  readonly count: number;
  /** Colours that people gave zones, by zone number. */
  readonly own?: Readonly<Record<number, string>>;
}

/** Colours offered for zones of one's own choice. */
export const ownColours: readonly string[] = unordered;

/** Fill, pattern and mark colour of a zone. `zone` counts from 1; past 6 the six styles repeat. */
export function zoneStyle(zone: number, { set = 'ordered', count, own = {} }: ZoneStyleOptions): ZoneStyle {
  const place = (zone - 1) % 6;
  const palette = set === 'unordered' ? unordered : ordered[Math.min(6, Math.max(1, count))]!;
  const fill = own[zone] ?? palette[place % palette.length]!;
  return { fill, pattern: patterns[place]!, mark: markOn(fill) };
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

/** Contrast ratio of two hex colours (WCAG 2.2). */
export function contrast(one: string, other: string): number {
  const [low, high] = [luminance(one), luminance(other)].sort((a, b) => a - b);
  return (high! + 0.05) / (low! + 0.05);
}

export function rampStops(ramp: RampName): readonly string[] {
  return ramps[ramp];
}

/** Red, green, blue (0–255) of a share 0…1 along a ramp; shares outside are held at the ends. */
export function rampColour(ramp: RampName, share: number): readonly [number, number, number] {
  const stops = ramps[ramp];
  const place = Math.min(1, Math.max(0, share)) * (stops.length - 1);
  const below = Math.min(stops.length - 2, Math.floor(place));
  const [from, to] = [channels(stops[below]!), channels(stops[below + 1]!)];
  const mix = (part: 0 | 1 | 2) => Math.round(from[part] + (to[part] - from[part]) * (place - below));
  return [mix(0), mix(1), mix(2)];
}

/** Colours that people gave classes, by class number. */
export function ownClassColours(classes: readonly { value: number; colour: string | null }[] | null): Record<number, string> {
  return Object.fromEntries((classes ?? []).flatMap(({ value, colour }) => (colour === null ? [] : [[value, colour]])));
}

/** CSS gradient of a ramp, low at the left. */
export function rampGradient(ramp: RampName): string {
  return `linear-gradient(to right, ${ramps[ramp].join(', ')})`;
}

/** Colour of a class number (soil classes); classes past six repeat, so the legend always has the name. */
export function classColour(classNumber: number, own: Readonly<Record<number, string>> = {}): string {
  const chosen = own[classNumber];
  if (chosen !== undefined) return chosen;
  return unordered[((Math.round(classNumber) % 6) + 6) % 6]!;
}

export function channels(hex: string): [number, number, number] {
  return [1, 3, 5].map((at) => Number.parseInt(hex.slice(at, at + 2), 16)) as [number, number, number];
}

/** Real colours of end posts, by the name the estate typed. */
export const postFills: Readonly<Record<string, string>> = {
  white: '#FFFFFF', red: '#B3261E', blue: '#2158B0', green: '#2F7D3B', yellow: '#F2C230', orange: '#E0741B',
  black: '#16191B', grey: '#9A9C98', violet: '#6B4FA0', brown: '#7A4A24',
};
