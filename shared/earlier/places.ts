import { isBlank } from '../lab/file/cells.ts';
import type { LabTable } from '../lab/file/layout.ts';
import type { Asking } from '../lab/file/questions.ts';
import type { PlaceColumns } from './columns.ts';
import { placeReachM, type EarlierBlock, type EarlierPlace, type EarlierSurroundings, type RefusedPart } from './earlierTable.ts';
import { distanceTo, NearestVine, placeOf } from './nearestVine.ts';
import { blocksOfLines, numberedVine } from './numberedVines.ts';
import { readPositions } from './positions.ts';

type Found = EarlierPlace | RefusedPart;
type Line = LabTable['rows'][number];

/** Kept apart by what only one of them has. */
export const isPlace = (found: Found): found is EarlierPlace => 'rowId' in found;

/**
 * The vine of each line. Where a table has row and number and coordinates, the two are held against each other: they
 * agree, or a person says which of them is right. Null while something about the place is not answered.
 */
export function placesOfLines(table: LabTable, columns: PlaceColumns, around: EarlierSurroundings, asking: Asking): ReadonlyMap<number, Found> | null {
  const nearest = new NearestVine(around.blocks);
  const positions = readPositions(table, columns, { blocks: around.blocks, nearest, asking });
  if (positions === null) return null;
  const hasPoints = columns.x !== null;
  const byPoint = ({ line }: Line): Found => {
    const position = positions.get(line);
    const found = position === undefined ? null : nearest.find(position);
    if (found === null) return { line, code: 'noPosition', params: {} };
    if (found.metres > placeReachM) return { line, code: 'tooFar', params: { metres: Math.round(found.metres), block: found.block.name, reach: placeReachM } };
    return placeOf(found.block, found.vine, found.metres);
  };
  const all = (how: (row: Line) => Found) => new Map(table.rows.map((row) => [row.line, how(row)]));
  const pointsOnly = () => {
    asking.say('byPoint', { reach: placeReachM });
    return all(byPoint);
  };
  if (columns.row === null || columns.vine === null) return pointsOnly();
  const blockOf = hasPoints && columns.block === null && around.blocks.length > 1 ? new Map(table.rows.flatMap(({ line }) => blockByPoint(line))) : blocksOfLines(table, columns, { blocks: around.blocks, asking });
  if (blockOf === null) return null;
  const isRenumbered = [...new Set(blockOf.values())].some((block) => block !== 'unknown' && block.named.some(({ labelWas }) => labelWas !== null));
  const numbering = isRenumbered ? asking.ask('numbering', { code: 'numbering', choices: ['now', 'before'] }) : 'now';
  if (numbering === null) return null;
  const byNumber = ({ line, cells }: Line): Found => {
    const block = blockOf.get(line);
    if (block === undefined || block === 'unknown')
      return {
        line,
        code: columns.block !== null && !isBlank(cells[columns.block]) ? 'noBlock' : 'noPlace',
        params: { name: columns.block === null ? '' : String(cells[columns.block] ?? '').slice(0, 40) },
      };
    return numberedVine(block, cells, { line, row: columns.row!, vine: columns.vine!, numbering });
  };
  const numbered = all(byNumber);
  if (!hasPoints || positions.size === 0) return numbered;
  const apart = table.rows.flatMap(({ line }) => distanceApart(numbered.get(line)!, line));
  if (apart.length > 0 && middleOf(apart) <= placeReachM) {
    asking.say('placesAgree', { count: apart.length, metres: Number(middleOf(apart).toFixed(1)) });
    return numbered;
  }
  const answer = asking.ask('place', { code: apart.length === 0 ? 'placeUnknown' : 'place', params: { count: apart.length, metres: apart.length === 0 ? 0 : Math.round(middleOf(apart)) }, choices: ['coordinates', 'rows'], suggestion: 'coordinates' });
  return answer === null ? null : answer === 'rows' ? numbered : pointsOnly();

  function blockByPoint(line: number): [number, EarlierBlock][] {
    const position = positions!.get(line);
    const found = position === undefined ? null : nearest.find(position);
    return found === null ? [] : [[line, found.block]];
  }

  function distanceApart(found: Found, line: number): number[] {
    const position = positions!.get(line);
    return !isPlace(found) || position === undefined ? [] : [distanceTo(around.blocks.find(({ id }) => id === found.blockId)!, found, position)];
  }
}

function middleOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)]!;
}
