import { postFills, zoneStyle, type Pattern } from '../../lib/colours.ts';
import type { StripColours, StripRow, StripTarget, StripVine } from './rowStripTypes.ts';
import { postPx, vineEdgeM, vineM, xOfM, type StripScale } from './stripLayout.ts';

/** Drawing of one row as plain shapes, so that SVG and canvas paint the same picture. */

export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

export interface ZoneBox extends Box {
  readonly fill: string;
  readonly pattern: Pattern;
  readonly mark: string;
}

export interface PostBox extends Box {
  readonly fill: string;
}

export interface TickPath {
  readonly d: string;
  readonly colour: string;
}

export interface RowShapes {
  readonly row: StripRow;
  readonly outline: Box;
  readonly zones: readonly ZoneBox[];
  /** Living vines, half ticks of replants, square tops of off-types: one path a colour. */
  readonly ticks: readonly TickPath[];
  readonly holes: readonly Box[];
  readonly doubtful: readonly Box[];
  readonly cuts: readonly number[];
  readonly posts: readonly PostBox[];
}

export interface RowPlace {
  readonly y: number;
  readonly bar: number;
  readonly scale: StripScale;
  readonly colours: StripColours;
}

/** Under so many px a vine single ticks are only grey; a tall bar carries finer ones. */
const leastTickPx = 4;
const leastTallTickPx = 3;
const tallBarPx = 24;
/** Where a bar carries no zone yet. */
const bare = { fill: 'none', pattern: 'plain' as Pattern, mark: 'var(--muted)' };

export function rowShapes(row: StripRow, place: RowPlace): RowShapes {
  const { y, bar, scale } = place;
  const [left, right] = [xOfM(row.startOffsetM, scale), xOfM(row.startOffsetM + row.lengthM, scale)];
  const runBox = (from: number, to: number): Box => {
    const x = xOfM(vineEdgeM(row, from), scale);
    return { x, y, width: xOfM(vineEdgeM(row, to + 1), scale) - x, height: bar };
  };
  const zones = row.zoneRuns.map((run) => ({ ...runBox(run.from, run.to), ...styleOf(run.zone, place.colours) }));
  return {
    row,
    outline: { x: left, y, width: right - left, height: bar },
    zones,
    ticks: ticksOf(row, place),
    holes: row.missing.map((vine) => runBox(vine, vine)),
    doubtful: (row.doubtful ?? []).map((run) => runBox(run.from, run.to)),
    cuts: row.zoneRuns.slice(1).map((run) => xOfM(vineEdgeM(row, run.from), scale)),
    posts: [postBox(row.startPost, left - postPx, place), postBox(row.endPost, right, place)],
  };
}

function styleOf(zone: number, colours: StripColours) {
  return zone === 0 ? bare : zoneStyle(zone, colours);
}

function postBox(colour: string | null, x: number, { y, bar }: RowPlace): PostBox {
  return { x, y: y - 0.5, width: postPx, height: bar + 1, fill: colour === null ? 'var(--sheet)' : (postFills[colour] ?? 'var(--sheet)') };
}

/** Under 4 px a vine, single ticks would only be grey: they are left out. */
function ticksOf(row: StripRow, { y, bar, scale, colours }: RowPlace): TickPath[] {
  if ((row.lengthM / Math.max(1, row.vineCount)) * scale.pxPerM < (bar >= tallBarPx ? leastTallTickPx : leastTickPx)) return [];
  const missing = new Set(row.missing);
  const [replant, offType] = [new Set(row.replant), new Set(row.offType)];
  const [top, bottom] = [y + bar * 0.2, y + bar * 0.8];
  const tick = (vine: number): string => {
    if (missing.has(vine)) return '';
    const x = round(xOfM(vineM(row, vine), scale));
    const from = replant.has(vine) ? y + bar * 0.5 : top;
    const cap = offType.has(vine) ? `M${x - 2} ${round(top)}h4` : '';
    return `M${x} ${round(from)}V${round(bottom)}${cap}`;
  };
  const runs = row.zoneRuns.length > 0 ? row.zoneRuns : [{ zone: 0, from: 1, to: row.vineCount }];
  return runs.map((run) => ({ colour: styleOf(run.zone, colours).mark, d: Array.from({ length: run.to - run.from + 1 }, (_, index) => tick(run.from + index)).join('') }));
}

function round(value: number): number {
  return Math.round(value * 10) / 10;
}

export interface TargetBox extends Box {
  readonly target: StripTarget;
}

/** Yellow block with ink outline, taller than the strip. */
export function targetBoxes(row: StripRow, targets: readonly StripTarget[], { y, bar, scale }: RowPlace): TargetBox[] {
  return vineBoxes(row, targets, { y, bar, scale }).map(({ at, vine }) => ({ x: at - 3, y: y - 2, width: 6, height: bar + 4, target: vine }));
}

/** Dashed outline. */
export function reserveBoxes(row: StripRow, reserves: readonly StripVine[], { y, bar, scale }: RowPlace): Box[] {
  return vineBoxes(row, reserves, { y, bar, scale }).map(({ at }) => ({ x: at - 3, y: y - 1, width: 6, height: bar + 2 }));
}

function vineBoxes<V extends StripVine>(row: StripRow, vines: readonly V[], { scale }: Pick<RowPlace, 'y' | 'bar' | 'scale'>): { at: number; vine: V }[] {
  return vines.filter((vine) => vine.rowId === row.id).map((vine) => ({ at: xOfM(vineM(row, vine.vine), scale), vine }));
}
