import { AnalysisError } from '../analysis/analysisError.ts';
import { largestRemainder } from './rounding.ts';

/**
 * First readings where nothing is known of the spread: some 20 vines over the zones, at least five in each, taken in
 * two or three places. Defaults are common practice; Stein's rule (see sampleSize.ts) takes over when they are in.
 */
export interface PilotZone {
  readonly zone: string;
  readonly vines: number;
}

export interface PilotOptions {
  readonly total?: number;
  readonly minimumPerZone?: number;
}

export interface PilotQuota {
  readonly zone: string;
  readonly n: number;
  /** Separate places the vines should come from. */
  readonly places: number;
}

/** The rest after the minimum goes to the larger zones; a zone with fewer vines than its share gives all it has. */
export function pilotQuotas(zones: readonly PilotZone[], options: PilotOptions = {}): PilotQuota[] {
  const { total = 20, minimumPerZone = 5 } = options;
  if (zones.length === 0) throw new AnalysisError('no_zones', 'A pilot needs at least one zone.');
  const minimum = zones.map((zone) => Math.min(zone.vines, minimumPerZone));
  const spare = Math.max(0, total - minimum.reduce((sum, n) => sum + n, 0));
  const room = zones.map((zone, i) => zone.vines - minimum[i]!);
  const allRoom = room.reduce((sum, vines) => sum + vines, 0);
  const extra = allRoom === 0 ? room.map(() => 0) : largestRemainder(room.map((vines) => (Math.min(spare, allRoom) * vines) / allRoom));
  return zones.map((zone, i) => {
    const n = minimum[i]! + extra[i]!;
    return { zone: zone.zone, n, places: n >= 8 ? 3 : Math.min(n, 2) };
  });
}
