import { boundsOf } from '../../../shared/geo/bounds.ts';
import type { MultiPolygonXY, RingXY, XY } from '../../../shared/geo/coordinates.ts';
import { polygonsCentroid, polygonsArea } from '../../../shared/geo/rings.ts';
import { convergenceDeg, fromUtm, polygonsToUtm } from '../../../shared/geo/utm.ts';
import { zoneSpan, zoneStyle } from '../../../shared/catalog/zoneStyles.ts';
import type { Paper } from '../paper.ts';
import { ink } from './reportPage.ts';
import type { ReportZone, ZoneReport } from './zoneReport.ts';

interface Box {
  x: number;
  y: number;
  width: number;
  height: number;
}

type ToPaper = (point: XY) => [number, number];

/** Marks of the zones on paper, in the order of the screen's patterns, so that grey print tells them apart; past six they repeat and the number decides. */
const patterns: ((page: Paper, box: Box) => void)[] = [
  () => undefined,
  (page, box) => hatch(page, box, 1),
  dots,
  (page, box) => {
    level(page, box);
    upright(page, box);
  },
  (page, box) => hatch(page, box, -1),
  level,
];
const gap = 6;
const patternOpacity = 0.65;

/** The zones as vectors with their marks and numbers, the outline, a scale bar and an arrow to true north. */
export function drawMap(page: Paper, report: ZoneReport, box: Box): void {
  const outline = polygonsToUtm(report.boundary, report.epsg);
  const zones = report.zones.map((zone) => ({ zone, number: zone.number, shape: polygonsToUtm(zone.polygonsLonLat, report.epsg) }));
  const { toPaper, metresPerPoint } = frame(outline, { ...box, width: box.width - 60 });
  for (const { zone, shape } of zones) {
    page.save();
    trace(page, shape, toPaper);
    page.clip('even-odd');
    fillZone(page, { zone, count: zoneSpan(zones) }, box);
    page.restore();
  }
  for (const { shape } of zones) {
    trace(page, shape, toPaper);
    page.lineWidth(0.9).strokeColor(ink).stroke();
  }
  trace(page, outline, toPaper);
  page.lineWidth(1.6).strokeColor(ink).stroke();
  if (report.standsOut) {
    trace(page, polygonsToUtm(report.standsOut, report.epsg), toPaper);
    // Chalk under the dashes, so that they are seen on dark zones and in grey.
    page.lineWidth(3).strokeColor('#FFFFFF').stroke();
    trace(page, polygonsToUtm(report.standsOut, report.epsg), toPaper);
    page.lineWidth(1.4).dash(4, { space: 3 }).strokeColor(ink).stroke().undash();
  }
  for (const { number, at } of numberSpots(zones, toPaper)) drawNumber(page, number, at);
  const right = box.x + box.width;
  const [middleX, middleY] = polygonsCentroid(outline);
  drawNorth(page, { x: right - 20, y: box.y + 30, turnDeg: -convergenceDeg(fromUtm([middleX, middleY], report.epsg), report.epsg), letter: 'N' });
  drawScale(page, { right, bottom: box.y + box.height, metresPerPoint, units: report.units });
}

export interface PaintedZone {
  readonly zone: Pick<ReportZone, 'number' | 'colour'>;
  /** Zones of the block; the ordered colours go by it. */
  readonly count: number;
}

/** Colour and mark of a zone over a box, as on the screen; whoever calls has clipped the page to the zone's shape. */
function fillZone(page: Paper, { zone: { number, colour }, count }: PaintedZone, box: Box): void {
  const { fill, mark } = zoneStyle(number, { count, own: colour === null ? {} : { [number]: colour } });
  page.rect(box.x, box.y, box.width, box.height).fill(fill);
  page.opacity(patternOpacity).lineWidth(0.6).strokeColor(mark).fillColor(mark);
  patterns[(number - 1) % patterns.length]!(page, box);
  page.opacity(1);
}

/** The patch of a zone in the legend. */
export function drawSwatch(page: Paper, painted: PaintedZone, box: Box): void {
  page.save();
  page.rect(box.x, box.y, box.width, box.height).clip();
  fillZone(page, painted, box);
  page.restore();
  page.rect(box.x, box.y, box.width, box.height).lineWidth(0.8).strokeColor(ink).stroke();
}

function frame(outline: MultiPolygonXY, box: Box): { toPaper: ToPaper; metresPerPoint: number } {
  const [west, south, east, north] = boundsOf(outline.flat());
  const metresPerPoint = Math.max((east - west) / box.width, (north - south) / box.height);
  const left = box.x + (box.width - (east - west) / metresPerPoint) / 2;
  const top = box.y + (box.height - (north - south) / metresPerPoint) / 2;
  return { metresPerPoint, toPaper: ([x, y]) => [left + (x - west) / metresPerPoint, top + (north - y) / metresPerPoint] };
}

function trace(page: Paper, shape: MultiPolygonXY, toPaper: ToPaper): void {
  for (const ring of shape.flat()) {
    ring.forEach((point, index) => {
      const [x, y] = toPaper(point);
      if (index === 0) page.moveTo(x, y);
      else page.lineTo(x, y);
    });
    page.closePath();
  }
}

function hatch(page: Paper, { x, y, width, height }: Box, direction: 1 | -1): void {
  for (let shift = -height; shift < width + height; shift += gap * Math.SQRT2) {
    if (direction === 1) page.moveTo(x + shift, y + height).lineTo(x + shift + height, y);
    else page.moveTo(x + shift, y).lineTo(x + shift + height, y + height);
  }
  page.stroke();
}

function level(page: Paper, { x, y, width, height }: Box): void {
  for (let shift = gap / 2; shift < height; shift += gap) page.moveTo(x, y + shift).lineTo(x + width, y + shift);
  page.stroke();
}

function upright(page: Paper, { x, y, width, height }: Box): void {
  for (let shift = gap / 2; shift < width; shift += gap) page.moveTo(x + shift, y).lineTo(x + shift, y + height);
  page.stroke();
}

function dots(page: Paper, { x, y, width, height }: Box): void {
  for (let down = gap / 2, line = 0; down < height; down += gap, line++) {
    for (let across = line % 2 === 0 ? gap / 4 : (3 * gap) / 4; across < width; across += gap) page.circle(x + across, y + down, 0.8);
  }
  page.fill();
}

interface Spot {
  /** On paper. */
  readonly at: [number, number];
  /** Half of the stretch that it is the middle of. */
  readonly room: number;
}

/** Numbers lie this far apart if they can, so that the ring of one does not cover another. */
const NUMBER_RADIUS = 9;
const HEIGHTS = 25;

/** A place for each number: where its zone has room and no other number is near; zones with least room choose first. */
export function numberSpots(zones: readonly { number: number; shape: MultiPolygonXY }[], toPaper: ToPaper): { number: number; at: [number, number] }[] {
  const choices = zones.map(({ number, shape }) => ({ number, spots: spotsIn(shape, toPaper) })).sort((a, b) => widest(a.spots) - widest(b.spots));
  const placed: { number: number; at: [number, number] }[] = [];
  for (const { number, spots } of choices) {
    const apart = ({ at }: Spot) => Math.min(...placed.map((other) => Math.hypot(at[0] - other.at[0], at[1] - other.at[1])), 3 * NUMBER_RADIUS);
    const worth = (spot: Spot) => Math.min(spot.room, 1.5 * NUMBER_RADIUS) + apart(spot);
    placed.push({ number, at: spots.reduce((best, spot) => (worth(spot) > worth(best) ? spot : best)).at });
  }
  return placed;
}

function widest(spots: readonly Spot[]): number {
  return Math.max(...spots.map(({ room }) => room));
}

/** Middles of the stretches of the largest part at several heights, that of its centre first. */
function spotsIn(shape: MultiPolygonXY, toPaper: ToPaper): Spot[] {
  const largest = shape.reduce((best, polygon) => (polygonsArea([polygon]) > polygonsArea([best]) ? polygon : best));
  const [, south, , north] = boundsOf(largest);
  const heights = [polygonsCentroid([largest])[1], ...Array.from({ length: HEIGHTS }, (_, i) => south + ((i + 0.5) / HEIGHTS) * (north - south))];
  const spots = heights.flatMap((y) => {
    const crossings = largest.flatMap((ring) => crossingsAt(ring, y)).sort((a, b) => a - b);
    return crossings.flatMap((from, i): Spot[] => {
      if (i % 2 === 1 || i + 1 === crossings.length) return [];
      const [left, right] = [toPaper([from, y]), toPaper([crossings[i + 1]!, y])];
      return [{ at: [(left[0] + right[0]) / 2, left[1]], room: (right[0] - left[0]) / 2 }];
    });
  });
  return spots.length > 0 ? spots : [{ at: toPaper(largest[0]![0]!), room: 0 }];
}

function crossingsAt(ring: RingXY, y: number): number[] {
  return ring.slice(1).flatMap(([bx, by], index) => {
    const [ax, ay] = ring[index]!;
    return ay > y !== by > y ? [ax + ((y - ay) / (by - ay)) * (bx - ax)] : [];
  });
}

function drawNumber(page: Paper, number: number, [x, y]: [number, number]): void {
  page.circle(x, y, 9).fillAndStroke('white', ink);
  page.font('bold').fontSize(10).fillColor(ink).text(String(number), x - 9, y - 7, { width: 18, align: 'center', lineBreak: false });
}

function drawNorth(page: Paper, { x, y, turnDeg, letter }: { x: number; y: number; turnDeg: number; letter: string }): void {
  page.save().rotate(turnDeg, { origin: [x, y] });
  page.moveTo(x, y - 18).lineTo(x + 6, y + 12).lineTo(x, y + 7).lineTo(x - 6, y + 12).closePath().fill(ink);
  page.restore();
  page.font('bold').fontSize(9).fillColor(ink).text(letter, x - 10, y - 32, { width: 20, align: 'center', lineBreak: false });
}

const metresPerFoot = 0.3048;

/** A bar of a round length, at most about 90 points long. */
function drawScale(page: Paper, { right, bottom, metresPerPoint, units }: { right: number; bottom: number; metresPerPoint: number; units: 'metric' | 'us' }): void {
  const unitM = units === 'us' ? metresPerFoot : 1;
  const most = (90 * metresPerPoint) / unitM;
  const power = 10 ** Math.floor(Math.log10(most));
  const length = [5, 2, 1].map((step) => step * power).find((value) => value <= most) ?? power;
  const width = (length * unitM) / metresPerPoint;
  page.rect(right - width, bottom - 6, width / 2, 4).fillAndStroke(ink, ink);
  page.rect(right - width / 2, bottom - 6, width / 2, 4).fillAndStroke('white', ink);
  page.font('plain').fontSize(8).fillColor(ink).text(`${length} ${units === 'us' ? 'ft' : 'm'}`, right - 100, bottom - 19, { width: 100, align: 'right', lineBreak: false });
}
