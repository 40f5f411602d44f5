import type { LonLat } from '../geo/coordinates.ts';
import { fromUtm } from '../geo/utm.ts';
import { findDecimalMark } from '../importing/cellNumbers.ts';
import { readAngle } from '../importing/degrees.ts';
import { cellText, isBlank } from '../lab/file/cells.ts';
import type { LabTable } from '../lab/file/layout.ts';
import type { Asking } from '../lab/file/questions.ts';
import type { PlaceColumns } from './columns.ts';
import { placeReachM, type EarlierBlock } from './earlierTable.ts';
import type { NearestVine } from './nearestVine.ts';

/** Longitude and latitude of each line that has them; null while the reference of the coordinates is not known. */
export function readPositions(table: LabTable, columns: PlaceColumns, { blocks, nearest, asking }: { blocks: readonly EarlierBlock[]; nearest: NearestVine; asking: Asking }): ReadonlyMap<number, LonLat> | null {
  const { x, y } = columns;
  if (x === null || y === null) return new Map();
  const filled = table.rows.filter(({ cells }) => !isBlank(cells[x]) && !isBlank(cells[y]));
  const { mark } = findDecimalMark(filled.flatMap(({ cells }) => [cellText(cells[x]), cellText(cells[y])]), '');
  const read = filled.map(({ line, cells }) => {
    const [first, second] = [readAngle(cellText(cells[x]), mark), readAngle(cellText(cells[y]), mark)];
    return { line, pair: first.axis === 'lat' && second.axis === 'lon' ? ([second.degrees, first.degrees] as const) : ([first.degrees, second.degrees] as const) };
  }).filter(({ pair }) => pair.every(Number.isFinite) && !(pair[0] === 0 && pair[1] === 0));
  if (columns.isProjected || read.some(({ pair }) => Math.abs(pair[0]) > 360 || Math.abs(pair[1]) > 360)) {
    const systems = [...new Set(blocks.map(({ epsg }) => epsg))].sort((a, b) => a - b);
    const answer = asking.ask('reference', { code: 'reference', params: { example: read[0] ? read[0].pair.join(', ') : '' }, choices: systems.map((epsg) => ({ value: String(epsg), label: utmName(epsg) })) });
    if (answer === null) return null;
    return new Map(read.map(({ line, pair }) => [line, fromUtm(pair, Number(answer))]));
  }
  const within = (turned: boolean) => read.filter(({ pair }) => isNear(turned ? [pair[1], pair[0]] : pair, nearest)).length;
  const isTurned = within(false) === 0 && within(true) > 0;
  if (isTurned) asking.say('axesTurned');
  return new Map(read.flatMap(({ line, pair }) => {
    const [lon, lat] = isTurned ? [pair[1], pair[0]] : pair;
    return Math.abs(lat) <= 84 && Math.abs(lon) <= 180 ? [[line, [lon, lat] as const]] : [];
  }));
}

function isNear([lon, lat]: LonLat, nearest: NearestVine): boolean {
  return Math.abs(lat) <= 84 && Math.abs(lon) <= 180 && (nearest.find([lon, lat])?.metres ?? Infinity) <= placeReachM;
}

function utmName(epsg: number): string {
  return `UTM ${epsg % 100}${epsg < 32700 ? 'N' : 'S'} (EPSG:${epsg})`;
}
