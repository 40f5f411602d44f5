import type { FieldMeasure, FieldRound, WalkStop } from '../contracts/rounds.ts';
import { checkStopping, sumsOf, type StoppingState } from '../sampling/sequential.ts';

/** How far a zone is for one measure, with what this person has read. */
export interface ZoneStanding {
  readonly zone: number;
  readonly measureCode: string;
  readonly n: number;
  readonly planned: number;
  /** `enough`: may stop here; `goOn`: so many more are expected; `walkOn`: nothing can be said yet, or the vines read are no random part. */
  readonly say: 'enough' | 'goOn' | 'walkOn' | 'allRead';
  readonly more: number | null;
  readonly state: StoppingState;
}

/** What of a stop decides where a zone stands. */
export type StandingStop = Pick<WalkStop, 'targetId' | 'zone' | 'drawOrder' | 'measures'>;

export interface FieldValue {
  readonly targetId: string;
  readonly measureCode: string;
  readonly value: number;
}

/**
 * Standing of one zone and measure. Stopping early is offered only where the vines read are the first of the draw:
 * the walk goes row by row, and what one happens to have passed is no random sample.
 */
export function standingOf(round: { readonly stops: readonly StandingStop[]; readonly zones: readonly Pick<FieldRound['zones'][number], 'number' | 'vines'>[] }, measure: FieldMeasure, zone: number, values: readonly FieldValue[]): ZoneStanding {
  const stops = round.stops.filter((stop) => stop.zone === zone && stop.measures.includes(measure.code));
  const read = readStops(stops, measure.code, values);
  const vines = round.zones.find(({ number }) => number === zone)?.vines;
  const state = checkStopping(sumsOf(read.map(({ value }) => value)), {
    margin: { kind: measure.marginKind, value: measure.margin },
    confidence: measure.confidence,
    populationSize: vines && vines >= read.length ? vines : Infinity,
    resolution: 10 ** -measure.decimals,
    skewed: measure.skewed,
    randomOrder: isFirstOfDraw(read.map(({ stop }) => stop), stops),
  });
  const done = read.length >= stops.length;
  return { zone, measureCode: measure.code, n: read.length, planned: stops.length, more: state.more, state, say: done ? 'allRead' : sayOf(state) };
}

function sayOf({ decision, more }: StoppingState): ZoneStanding['say'] {
  if (decision === 'enough' || decision === 'everyVineRead') return 'enough';
  // The width may be there already, but of vines that are no random part: nothing can be left out, and nothing is missing.
  return more === null || more === 0 || decision === 'tooFewYet' ? 'walkOn' : 'goOn';
}

/** One value a vine: the last one typed counts. */
function readStops(stops: readonly StandingStop[], code: string, values: readonly FieldValue[]): { stop: StandingStop; value: number }[] {
  const last = new Map(values.filter(({ measureCode }) => measureCode === code).map(({ targetId, value }) => [targetId, value]));
  return stops.flatMap((stop) => (last.has(stop.targetId) ? [{ stop, value: last.get(stop.targetId)! }] : []));
}

/** True when nothing was left out before the last vine read, in the order of the draw. */
function isFirstOfDraw(read: readonly StandingStop[], all: readonly StandingStop[]): boolean {
  const latest = read.reduce((most, { drawOrder }) => Math.max(most, drawOrder), 0);
  return read.length > 0 && all.every(({ targetId, drawOrder }) => drawOrder > latest || read.some((stop) => stop.targetId === targetId));
}
