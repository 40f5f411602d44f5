import type { BlockRowView } from '../../../shared/contracts/rows.ts';

export interface WalkSettings {
  /** "lon,lat", or null for the block's own gate. */
  readonly gate: string | null;
  readonly end: 'gate' | 'anywhere';
  readonly people: number;
}

/** A place a walk can begin at: the block's own gate, or a post at one of its corners. */
export interface WalkGate {
  readonly kind: 'recorded' | 'start' | 'end';
  readonly rowLabel: string;
  readonly at: string | null;
}

export function walkGates(rows: readonly BlockRowView[]): WalkGate[] {
  const corners = [rows[0], ...(rows.length > 1 ? [rows.at(-1)] : [])].flatMap((row): WalkGate[] => {
    const [first, last] = [row?.pieces[0], row?.pieces.at(-1)];
    if (!row || !first || !last) return [];
    return [{ kind: 'start', rowLabel: row.label, at: textOf(first.from) }, { kind: 'end', rowLabel: row.label, at: textOf(last.to) }];
  });
  return [{ kind: 'recorded', rowLabel: '', at: null }, ...corners];
}

const textOf = ([lon, lat]: readonly [number, number]) => `${lon.toFixed(7)},${lat.toFixed(7)}`;

/** The same as longitude and latitude. */
export function gatePlace(gate: string | null): [number, number] | null {
  if (gate === null) return null;
  const [lon, lat] = gate.split(',').map(Number);
  return lon === undefined || lat === undefined ? null : [lon, lat];
}
