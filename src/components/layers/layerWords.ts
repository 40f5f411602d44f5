import type { LayerBeside, LayerFinding, LayerSurvey, Readiness } from '../../../shared/contracts/layers.ts';
import type { Format } from '../../lib/format.ts';
import type { ChartAxis } from '../base/chartTypes.ts';
import type { ChipKind } from '../base/StateChip.vue';

interface Words {
  readonly t: (key: string, named: Record<string, unknown>) => string;
  readonly format: Format;
}

/** Lengths in the sentences and how many decimals they deserve. */
const lengths = new Map([['pixelM', 2], ['spacingM', 2], ['cellM', 2], ['widthM', 0]]);

/** A finding about a layer as a sentence: fact, value, and what it means. */
export function findingWords(finding: LayerFinding, { t, format }: Words): string {
  const named = Object.fromEntries(Object.entries(finding.params).map(([name, value]) => [name, typeof value !== 'number' ? value : lengths.has(name) ? format.withUnit('length', value, lengths.get(name)!) : format.number(value, Number.isInteger(value) ? 0 : 2)]));
  const open = finding.code === 'impossible' && (finding.params.min === undefined || finding.params.max === undefined);
  return t(`layers.finding.${finding.code}${open ? 'Open' : ''}`, named);
}

export const readinessChip: Record<Readiness, ChipKind> = { ready: 'done', doubt: 'asks', blocked: 'stop', overridden: 'asks', stale: 'plain' };
export const severityChip: Record<LayerFinding['severity'], ChipKind> = { red: 'stop', amber: 'asks', note: 'plain' };

/** Axes of a semivariogram from 0, with four steps each. */
export function variogramAxes(bins: LayerSurvey['bins'], format: Format): { x: ChartAxis; y: ChartAxis } {
  const farM = roundUp(bins.at(-1)?.distanceM ?? 1);
  const high = roundUp(Math.max(...bins.map(({ gamma }) => gamma), 1e-9));
  const steps = (top: number) => [0, 1, 2, 3, 4].map((step) => (top * step) / 4);
  const decimals = Math.max(0, 1 - Math.floor(Math.log10(high / 4)));
  return { x: { low: 0, high: farM, ticks: steps(farM), text: (value) => format.figure('length', value, 0) }, y: { low: 0, high, ticks: steps(high), text: (value) => format.number(value, decimals) } };
}

/** The next of 1, 2, 4, 8 times a power of ten that holds a value. */
function roundUp(value: number): number {
  const power = 10 ** Math.floor(Math.log10(value));
  return power * [1, 2, 4, 8, 10].find((times) => value <= times * power)!;
}

/** From this correlation on two layers tell one story twice (common practice). */
const sameStory = 0.9;

export function tellsTheSame({ correlation }: Pick<LayerBeside, 'correlation'>): boolean {
  return Math.abs(correlation) > sameStory;
}

/** What another layer is beside this one: one story twice, off by so much, or of its own. */
export function besideWords(other: LayerBeside, { t, format }: Words): string {
  const alike = t(tellsTheSame(other) ? 'layers.beside.same' : 'layers.beside.own', { r: format.number(other.correlation, 2) });
  if (other.shift === null) return alike;
  const { eastM, northM } = other.shift;
  const parts = [
    ...(Math.abs(eastM) < 0.5 ? [] : [t(eastM > 0 ? 'layers.beside.east' : 'layers.beside.west', { far: format.withUnit('length', Math.abs(eastM), 1) })]),
    ...(Math.abs(northM) < 0.5 ? [] : [t(northM > 0 ? 'layers.beside.north' : 'layers.beside.south', { far: format.withUnit('length', Math.abs(northM), 1) })]),
  ];
  return `${t('layers.beside.shifted', { far: format.list(parts) })} ${alike}`;
}
