import type { LayerFinding, Readiness } from '../../../shared/contracts/layers.ts';
import type { Format } from '../../lib/format.ts';
import type { ChipKind } from '../base/StateChip.vue';

interface Words {
  readonly t: (key: string, named: Record<string, unknown>) => string;
  readonly format: Format;
}

const lengths = new Set(['pixelM', 'spacingM', 'cellM']);

/** A finding about a layer as a sentence: fact, value, and what it means. */
export function findingWords(finding: LayerFinding, { t, format }: Words): string {
  const named = Object.fromEntries(Object.entries(finding.params).map(([name, value]) => [name, typeof value !== 'number' ? value : lengths.has(name) ? format.withUnit('length', value, 2) : format.number(value, Number.isInteger(value) ? 0 : 2)]));
  const open = finding.code === 'impossible' && (finding.params.min === undefined || finding.params.max === undefined);
  return t(`layers.finding.${finding.code}${open ? 'Open' : ''}`, named);
}

export const readinessChip: Record<Readiness, ChipKind> = { ready: 'done', doubt: 'asks', blocked: 'stop', overridden: 'asks', stale: 'plain' };
export const severityChip: Record<LayerFinding['severity'], ChipKind> = { red: 'stop', amber: 'asks', note: 'plain' };
