import type { ZoneOperation } from '../../../shared/contracts/zonings.ts';
import { ringFrom, type Corners } from '../map/outline.ts';

/** A line that splits a zone, or an area that a zone takes. */
export type PenKind = 'split' | 'area';

export interface ZonePenState {
  readonly kind: PenKind;
  readonly zone: number;
}

export const leastCorners: Readonly<Record<PenKind, number>> = { split: 2, area: 3 };

/** What the drawn corners ask for. */
export function operationOf({ kind, zone }: ZonePenState, corners: Corners): ZoneOperation {
  if (kind === 'split') return { kind: 'split', zone, line: { type: 'LineString', coordinates: corners.map(([lon, lat]) => [lon, lat]) } };
  return { kind: 'giveArea', toZone: zone, area: { type: 'Polygon', coordinates: [ringFrom(corners).map(([lon, lat]): [number, number] => [lon!, lat!])] } };
}
