import type { LayerFinding } from '../../../shared/contracts/layers.ts';
import type { BlockLayer } from '../../models/BlockLayer.ts';

/** Points of percent by which the extent of a finding may change and still be what somebody answered for (judgement). */
const sameExtent = 5;

type Judged = Pick<BlockLayer, 'findings' | 'override'>;

/**
 * Who answers for a layer that was placed anew. An override stays while every finding that stops the layer was there before,
 * to about the same extent; one that does not hold any more leaves a note with its name and reason, until somebody answers again.
 */
export function keptOverride(before: Judged | undefined, findings: readonly LayerFinding[]): Judged {
  const stops = findings.filter(isRed);
  const lapsed = before?.findings.find(({ code }) => code === 'overrideLapsed');
  if (stops.length === 0 || (before?.override ?? null) === null) return { findings: stops.length > 0 && lapsed ? [...findings, lapsed] : [...findings], override: null };
  const { findings: known, override } = before!;
  if (stops.every((stop) => known.some((each) => isRed(each) && isSame(each, stop)))) return { findings: [...findings], override };
  return { findings: [...findings, { code: 'overrideLapsed', severity: 'note', params: { who: override!.by, reason: override!.reason } }], override: null };
}

const isRed = ({ severity }: LayerFinding) => severity === 'red';

function isSame(one: LayerFinding, other: LayerFinding): boolean {
  const extent = ({ params }: LayerFinding) => (typeof params.percent === 'number' ? params.percent : 0);
  return one.code === other.code && Math.abs(extent(one) - extent(other)) <= sameExtent;
}
