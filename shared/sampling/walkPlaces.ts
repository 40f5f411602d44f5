import type { XY } from '../geo/coordinates.ts';
import { type AlongAcross, type RowFrame, toAlongAcross } from '../geo/rowFrame.ts';
import type { Alley, AlleyLayout, WalkPlace } from './walkLayout.ts';

/**
 * Where a gate joins the walk: the nearest point of the headlands or of the outermost alleys, and a path of its own from
 * there when the gate lies off them. A start among the rows, where somebody stands, lies in its alley: rows are walls to it too.
 */
export function placeOfGate(layout: AlleyLayout, frame: RowFrame, gateXY: XY): WalkPlace {
  const gate = toAlongAcross(frame, gateXY);
  const best = amongRows(layout, gate) ?? nearestOutside(layout, gate);
  return best.distanceM < LEAST_SPUR_M ? best.place : { ...best.place, spur: { lengthM: best.distanceM, ...gate } };
}

/** A gate nearer than this stands on the headland. */
const LEAST_SPUR_M = 1e-6;

interface Candidate {
  readonly place: WalkPlace;
  readonly distanceM: number;
}

/** The place in the alley in which somebody stands, or at the nearer end of the break in it; null outside the rows and where the alley is shut. */
function amongRows({ alleys }: AlleyLayout, { s, t }: AlongAcross): Candidate | null {
  if (s < alleys[0]!.s || s > alleys.at(-1)!.s) return null;
  const alley = alleys.reduce((best, { s: other }, j) => (Math.abs(other - s) < Math.abs(alleys[best]!.s - s) ? j : best), 0);
  const { s: middle, bottomT, topT, breaks = [] } = alleys[alley]!;
  if (t <= bottomT || t >= topT) return null;
  const ends = breaks.find(([from, to]) => from < t && t < to) ?? [t, t];
  const nearer = t - ends[0] <= ends[1] - t ? ends[0] : ends[1];
  if (ends[0] <= bottomT && ends[1] >= topT) return null;
  return { place: { at: 'alley', alley, t: nearer }, distanceM: Math.hypot(s - middle, t - nearer) };
}

function nearestOutside(layout: AlleyLayout, gate: AlongAcross): Candidate {
  let best: Candidate | null = null;
  for (const candidate of candidatesFor(layout, gate)) {
    if (best === null || candidate.distanceM < best.distanceM) best = candidate;
  }
  if (best === null) throw new Error('a layout has at least one alley');
  return best;
}

function* candidatesFor(layout: AlleyLayout, gate: AlongAcross): Generator<Candidate> {
  const ends = [
    { end: 'bottom', steps: layout.bottomM, of: (alley: Alley) => alley.bottomT },
    { end: 'top', steps: layout.topM, of: (alley: Alley) => alley.topT },
  ] as const;
  for (const { end, steps, of } of ends) {
    for (let j = 0; j < layout.alleys.length; j++) {
      const here = endPoint(layout, j, of);
      const next = layout.alleys[j + 1] === undefined || (steps[j] ?? null) === null ? here : endPoint(layout, j + 1, of);
      const { share, distanceM } = nearestOn(here, next, gate);
      const place: WalkPlace = share <= 0 || next === here ? { at: 'end', alley: j, end } : share >= 1 ? { at: 'end', alley: j + 1, end } : { at: 'headland', alley: j, end, share };
      yield { place, distanceM };
    }
  }
  for (const j of new Set([0, layout.alleys.length - 1])) {
    const alley = layout.alleys[j]!;
    if ((alley.breaks ?? []).length > 0) continue;
    const [bottom, top] = [{ s: alley.s, t: alley.bottomT }, { s: alley.s, t: alley.topT }];
    const { share, distanceM } = nearestOn(bottom, top, gate);
    if (share > 0 && share < 1) yield { place: { at: 'alley', alley: j, t: bottom.t + share * (top.t - bottom.t) }, distanceM };
  }
}

function endPoint(layout: AlleyLayout, j: number, of: (alley: Alley) => number): AlongAcross {
  const alley = layout.alleys[j]!;
  return { s: alley.s, t: of(alley) };
}

function nearestOn(from: AlongAcross, to: AlongAcross, point: AlongAcross): { share: number; distanceM: number } {
  const [ds, dt] = [to.s - from.s, to.t - from.t];
  const square = ds * ds + dt * dt;
  const share = square === 0 ? 0 : Math.min(1, Math.max(0, ((point.s - from.s) * ds + (point.t - from.t) * dt) / square));
  return { share, distanceM: Math.hypot(point.s - from.s - share * ds, point.t - from.t - share * dt) };
}
