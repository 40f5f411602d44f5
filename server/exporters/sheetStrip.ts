import type { FieldRound } from '../../shared/contracts/rounds.ts';
import type { Paper } from './paper.ts';

/** Where the strip stands on the page, in points. */
export interface StripPlace {
  x: number;
  y: number;
  width: number;
  height: number;
}

interface StripWords {
  row: string;
  /** Post colours at the start end and the far end of the rows. */
  start: string;
  end: string;
}

const labelRoom = 11;
const widestPitch = 16;

/**
 * The block as its rows side by side, each from its start post at the bottom to its far post: zones in greys, the stops
 * with their numbers. What the crew sees when it looks along the headland.
 */
export function drawSheetStrip(pdf: Paper, round: FieldRound, place: StripPlace, words: StripWords): void {
  const { rows, stops } = round;
  if (rows.length === 0) return;
  pdf.font('plain').fontSize(7).fillColor('black');
  pdf.text(words.end, place.x, place.y, { lineBreak: false });
  pdf.text(words.start, place.x, place.y + place.height - 8, { lineBreak: false });
  const side = Math.max(pdf.widthOfString(words.start), pdf.widthOfString(words.end)) + 6;
  const left = place.x + side;
  const pitch = Math.min(widestPitch, (place.width - side) / rows.length);
  const [top, bottom] = [place.y + 2, place.y + place.height - labelRoom];
  const most = Math.max(...rows.map(({ vineCount }) => vineCount), 1);
  const heightOf = (vines: number) => (vines / most) * (bottom - top);
  const visited = new Set(stops.map(({ rowId }) => rowId));
  let labelledTo = Number.NEGATIVE_INFINITY;
  rows.forEach((row, index) => {
    const x = left + (index + 0.5) * pitch;
    for (const { zone, from, to } of row.runs) {
      const [low, high] = [heightOf(from - row.firstOrdinal), heightOf(to - row.firstOrdinal + 1)];
      pdf.rect(x - pitch * 0.42, bottom - high, pitch * 0.84, high - low).fill(greyOf(zone));
    }
    pdf.moveTo(x, bottom).lineTo(x, bottom - heightOf(row.vineCount)).lineWidth(visited.has(row.id) ? 0.9 : 0.3).strokeColor(visited.has(row.id) ? 'black' : '#888888').stroke();
    if (!visited.has(row.id)) return;
    const half = pdf.font('plain').fontSize(6.5).widthOfString(row.label) / 2;
    // A row whose number would touch the one before it goes without; its marks and the table name it.
    if (x - half < labelledTo + 1.5) return;
    labelledTo = x + half;
    pdf.fillColor('black').text(row.label, x - 12, bottom + 3, { width: 24, align: 'center', lineBreak: false });
  });
  const indexOf = new Map(rows.map((row, index) => [row.id, index]));
  const placed: { x: number; y: number }[] = [];
  for (const stop of stops) {
    const index = indexOf.get(stop.rowId);
    if (index === undefined) continue;
    const row = rows[index]!;
    const mark = freePlace(placed, { x: left + (index + 0.5) * pitch, y: bottom - heightOf(stop.ordinal - row.firstOrdinal + 0.5) });
    placed.push(mark);
    drawStopMark(pdf, String(stop.number), mark);
  }
  pdf.fillColor('black').strokeColor('black');
}

/** Beside its vine when another mark is there already: a number that is covered is a vine that is forgotten. */
function freePlace(placed: readonly { x: number; y: number }[], at: { x: number; y: number }): { x: number; y: number } {
  const width = 11;
  const steps = [0, 1, -1, 2, -2, 3, -3].map((step) => ({ x: at.x + step * width, y: at.y }));
  return steps.find((place) => placed.every(({ x, y }) => Math.hypot(x - place.x, y - place.y) >= width)) ?? at;
}

/** Light enough that a number on it reads, different enough that neighbours in a photocopy do. */
function greyOf(zone: number): string {
  return ['#f2f2f2', '#d9d9d9', '#e6e6e6', '#c9c9c9', '#ededed', '#d0d0d0'][Math.max(0, zone - 1) % 6]!;
}

function drawStopMark(pdf: Paper, text: string, { x, y }: { x: number; y: number }): void {
  const radius = text.length > 2 ? 6 : 5;
  pdf.circle(x, y, radius).lineWidth(0.7).fillAndStroke('white', 'black');
  pdf.font('bold').fontSize(6.5).fillColor('black').text(text, x - 10, y - 2.4, { width: 20, align: 'center', lineBreak: false });
}
