import type { ZoneEdit, ZoneMap } from '../../../shared/analysis/edits.ts';
import { runsFromLabels } from '../../../shared/analysis/editsRuns.ts';
import { CUT_PENALTY, snapToRows } from '../../../shared/analysis/snapToRows.ts';
import type { ZoneOperation } from '../../../shared/contracts/zonings.ts';
import type { LonLat, MultiPolygonLonLat } from '../../../shared/geo/coordinates.ts';
import { fromUtm } from '../../../shared/geo/utm.ts';
import { fromAlongAcross, toAlongAcross } from '../../../shared/geo/rowFrame.ts';
import { pointOnPiece } from '../../../shared/geo/vines.ts';
import { Unusable } from '../../errors.ts';
import { gridOf, type BlockVines } from '../../ground/blockVines.ts';
import { say } from '../../sentences/say.ts';

/** What a person asked for, as the edit that is kept and replayed: rows become ground, snapping becomes its outcome. */
export function editFromOperation(ground: BlockVines, map: ZoneMap, operation: ZoneOperation): ZoneEdit {
  switch (operation.kind) {
    case 'split':
      return { kind: 'split', zone: operation.zone, lineLonLat: operation.line.coordinates.map(([lon, lat]): LonLat => [lon, lat]) };
    case 'splitAlongRow': {
      const row = rowOf(ground, operation.rowId);
      return { kind: 'split', zone: operation.zone, lineLonLat: borderBesideRow(ground, row), alongRow: ground.stored[row]!.label };
    }
    case 'giveRows':
      return { kind: 'give', toZone: operation.toZone, ground: { shape: 'strips', strips: operation.rows.flatMap((part) => strips(ground, part)) } };
    case 'giveArea': {
      const polygons = operation.area.type === 'Polygon' ? [operation.area.coordinates] : operation.area.coordinates;
      return { kind: 'give', toZone: operation.toZone, ground: { shape: 'polygons', polygonsLonLat: polygons as unknown as MultiPolygonLonLat } };
    }
    case 'snap': {
      const { cellLabels } = snapToRows({ grid: gridOf(ground), labels: map.labels, rows: ground.rows, vines: ground.vines }, { mode: operation.mode, shortestRunM: operation.shortestRunM, cutPenalty: CUT_PENALTY });
      return { kind: 'replace', runs: runsFromLabels(cellLabels), reason: 'snapped' };
    }
    case 'clean':
      return { kind: 'clean', minPatchHa: operation.smallestPatchHa, narrowestM: operation.narrowestRows * ground.block.rowSpacingM };
    default:
      return operation;
  }
}

/** The line half-way from a row to the next one in order; beside the last row, half-way from the one before. A border on the vines themselves would share out one row. */
function borderBesideRow(ground: BlockVines, row: number): LonLat[] {
  const { rows, frame } = ground.rows;
  const other = rows[row + 1] ?? rows[row - 1];
  const shiftM = other === undefined ? 0 : (other.s - rows[row]!.s) / 2;
  return rows[row]!.pieces.flatMap((piece) =>
    [piece.fromXY, ...piece.bendsXY, piece.toXY].map((point) => {
      const { t, s } = toAlongAcross(frame, point);
      return fromUtm(fromAlongAcross(frame, { t, s: s + shiftM }), ground.block.epsg);
    }));
}

/** The strip of ground that belongs to a row, or to its vines from one place to another: half a vine beyond each end. */
function strips(ground: BlockVines, part: { rowId: string; from: number | null; to: number | null }): { lineLonLat: LonLat[]; widthM: number }[] {
  const row = ground.rows.rows[rowOf(ground, part.rowId)]!;
  const [from, to] = [part.from ?? -Infinity, part.to ?? Infinity];
  return row.pieces.flatMap((piece) => {
    const first = Math.max(from, piece.firstVine);
    const last = Math.min(to, piece.firstVine + piece.vineCount - 1);
    if (first > last) return [];
    const along = (ordinal: number) => piece.firstVineM + (ordinal - piece.firstVine) * piece.stepM;
    const start = part.from === null || first === piece.firstVine ? 0 : Math.max(0, along(first) - piece.stepM / 2);
    const end = part.to === null || last === piece.firstVine + piece.vineCount - 1 ? piece.lengthM : Math.min(piece.lengthM, along(last) + piece.stepM / 2);
    const reach = ground.block.headlandM;
    const line = [start, end].map((distance) => fromUtm(pointOnPiece(piece, distance), ground.block.epsg));
    return [{ lineLonLat: extended(line as [LonLat, LonLat], { start: start === 0 ? reach : 0, end: end === piece.lengthM ? reach : 0, lengthM: end - start }), widthM: ground.block.rowSpacingM }];
  });
}

/** A whole row's ground reaches over the headland to the outline. */
function extended([a, b]: [LonLat, LonLat], by: { start: number; end: number; lengthM: number }): LonLat[] {
  const [dx, dy] = [(b[0] - a[0]) / by.lengthM, (b[1] - a[1]) / by.lengthM];
  return [
    [a[0] - dx * by.start, a[1] - dy * by.start],
    [b[0] + dx * by.end, b[1] + dy * by.end],
  ];
}

function rowOf(ground: BlockVines, rowId: string): number {
  const row = ground.rowIndexOf.get(rowId);
  if (row === undefined) throw new Unusable('unknownRow', say('unknownRow', { block: ground.block.name }));
  return row;
}
