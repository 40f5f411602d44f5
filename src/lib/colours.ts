import type { RampName } from '../../shared/catalog/layerTypes.ts';
import { channels, luminance, unorderedColours } from '../../shared/catalog/zoneStyles.ts';

export { channels, luminance, markOn, patterns, zoneSpan, zoneStyle, type ColourSet, type Pattern, type ZoneStyle } from '../../shared/catalog/zoneStyles.ts';

/** Colours of layer values. Ramps: sampled from Crameri, Scientific colour maps (2020): tokyo, lajolla, bamako, lipari, vik. */
const ramps: Record<RampName, readonly string[]> = {
  vigour: ['#1C0E34', '#5D304A', '#705751', '#747053', '#7C9859', '#A2D887', '#EFFCDD'],
  conductivity: ['#191900', '#442817', '#8F403D', '#D9604E', '#E79452', '#F2C85D', '#FFFECB'],
  terrain: ['#003B47', '#16483A', '#365E26', '#637A0A', '#988D03', '#D0B74A', '#FFE5AD'],
  ripeness: ['#031326', '#294B70', '#6B5F76', '#A56267', '#E57B62', '#E5B488', '#FDF5DA'],
  difference: ['#001261', '#06548B', '#71A8C4', '#ECE5E0', '#D39774', '#AB4814', '#590008'],
  classes: unorderedColours,
};

/** Colours offered for zones of one's own choice. */
export const ownColours: readonly string[] = unorderedColours;

/** Contrast ratio of two hex colours (WCAG 2.2). */
export function contrast(one: string, other: string): number {
  const [low, high] = [luminance(one), luminance(other)].sort((a, b) => a - b);
  return (high! + 0.05) / (low! + 0.05);
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
  return unorderedColours[((Math.round(classNumber) % 6) + 6) % 6]!;
}

/** Real colours of end posts, by the name the estate typed. */
export const postFills: Readonly<Record<string, string>> = {
  white: '#FFFFFF', red: '#B3261E', blue: '#2158B0', green: '#2F7D3B', yellow: '#F2C230', orange: '#E0741B',
  black: '#16191B', grey: '#9A9C98', violet: '#6B4FA0', brown: '#7A4A24',
};
