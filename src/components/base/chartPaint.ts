import type { Chart, ChartDataset, ChartOptions, Plugin } from 'chart.js';
import type { ChartAxis, ChartDrop, ChartPoint, ChartSeries } from './chartTypes.ts';

/** Turns our series into Chart.js data sets and draws what Chart.js has no word for: hatching, targets, drop lines. */

export interface ChartInk {
  readonly ink: string;
  readonly muted: string;
  readonly slate: string;
  readonly rule: string;
  readonly ground: string;
  readonly lees: string;
}

type LineSet = ChartDataset<'line', { x: number; y: number }[]>;

const font = { family: "'Open Sans', sans-serif", size: 12 };
const quietDashes = [[3, 4], [8, 4], [2, 3]];

/** Squares hatched at 45°, 5 px, for what is only forecast. */
function hatchPattern(colour: string): CanvasPattern | string {
  const tile = document.createElement('canvas');
  tile.width = tile.height = 10;
  const pen = tile.getContext('2d');
  if (!pen) return colour;
  pen.strokeStyle = colour;
  pen.lineWidth = 2;
  pen.beginPath();
  for (const at of [-10, 0, 10]) {
    pen.moveTo(at - 1, 11);
    pen.lineTo(at + 11, -1);
  }
  pen.stroke();
  return pen.createPattern(tile, 'repeat') ?? colour;
}

export function dataSets(series: readonly ChartSeries[], ink: ChartInk): LineSet[] {
  return series.flatMap((one, index) => [...bandOf(one, ink), ...lineOf(one, index, ink)]);
}

const plain = { pointRadius: 0, pointHitRadius: 0, borderWidth: 0 };
const ends = (points: readonly ChartPoint[], end: 'low' | 'high') => points.filter((point) => point[end] !== undefined).map((point) => ({ x: point.x, y: point[end]! }));

/** Ribbon or hatched band as two edge lines, the second filled back to the first. */
function bandOf(series: ChartSeries, ink: ChartInk): LineSet[] {
  if (series.look === 'points' || series.points.every((point) => point.low === undefined)) return [];
  const isForecast = series.look === 'forecast';
  const edge = isForecast ? { borderColor: ink.slate, borderWidth: 1.2 } : { borderColor: 'transparent', borderWidth: 0 };
  return [
    { data: ends(series.points, 'low'), ...plain, ...edge, fill: false },
    { data: ends(series.points, 'high'), ...plain, ...edge, fill: '-1', backgroundColor: isForecast ? hatchPattern(ink.slate) : translucent(ink.slate, 0.26) },
  ];
}

function lineOf(series: ChartSeries, index: number, ink: ChartInk): LineSet[] {
  if (series.look === 'forecast') return [];
  const isPointed = series.look === 'measured' || series.look === 'points';
  const last = series.points.length - 1;
  return [
    {
      label: series.label,
      data: series.points.map(({ x, y }) => ({ x, y })),
      borderColor: series.look === 'quiet' ? ink.ink : ink.slate,
      borderWidth: series.look === 'quiet' ? 1.5 : series.look === 'curve' ? 2.5 : series.look === 'points' ? 0 : 2,
      borderDash: series.look === 'quiet' ? [...(series.dash ?? quietDashes[index % quietDashes.length]!)] : [],
      pointStyle: 'rect',
      pointRadius: isPointed ? 4.5 : 0,
      pointBorderColor: ink.ink,
      pointBorderWidth: 1.5,
      pointBackgroundColor: series.points.map((_, at) => (at === last ? ink.ink : ink.ground)),
      fill: false,
      clip: 8,
    },
  ];
}

function translucent(hex: string, share: number): string {
  return /^#[0-9a-f]{6}$/i.test(hex) ? hex + Math.round(share * 255).toString(16).padStart(2, '0') : hex;
}

export interface ChartFrame {
  readonly x: ChartAxis;
  readonly y: ChartAxis;
  readonly ink: ChartInk;
}

export function chartOptions({ x, y, ink }: ChartFrame): ChartOptions<'line'> {
  return {
    responsive: true,
    maintainAspectRatio: false,
    animation: false,
    events: [],
    layout: { padding: { top: 8, right: 8 } },
    plugins: { legend: { display: false }, tooltip: { enabled: false } },
    scales: {
      x: { type: 'linear', min: x.low, max: x.high, grid: { drawOnChartArea: false, drawTicks: true, tickColor: ink.ink, tickLength: 5 }, border: { color: ink.ink, width: 1.5 }, afterBuildTicks: (axis) => (axis.ticks = x.ticks.map((value) => ({ value }))), ticks: { color: ink.muted, font, callback: (value) => x.text(Number(value)), maxRotation: 0, autoSkip: true } },
      y: { type: 'linear', min: y.low, max: y.high, grid: { color: ink.rule, lineWidth: 1, drawTicks: false }, border: { display: false }, afterBuildTicks: (axis) => (axis.ticks = y.ticks.map((value) => ({ value }))), ticks: { color: ink.muted, font, padding: 6, callback: (value) => y.text(Number(value)) } },
    },
  };
}

export interface ChartMarks {
  readonly series: readonly ChartSeries[];
  readonly target: number | null;
  readonly targetWord: string;
  readonly drops: readonly ChartDrop[];
  readonly rainAt: readonly number[];
  readonly ink: ChartInk;
}

/** Error bars, the dashed target, drop lines with their counts, rain on the time axis, words at the curves' ends. */
export function marksPlugin(marks: () => ChartMarks): Plugin<'line'> {
  return {
    id: 'marks',
    beforeDatasetsDraw: (chart) => {
      const { target, drops, ink } = marks();
      if (target !== null) drawTarget(chart, target, marks());
      for (const drop of drops) drawDropLine(chart, drop, ink);
    },
    afterDatasetsDraw: (chart) => {
      const { series, rainAt, drops, ink } = marks();
      const levels = wordLevels(drops.map((drop) => placeOf(chart, drop)[0]));
      drops.forEach((drop, at) => drawDropWords(chart, drop, { ink, level: levels[at]! }));
      for (const one of series) drawErrorBars(chart, one, ink);
      for (const one of series) drawEndWord(chart, one, ink);
      for (const at of rainAt) drawRain(chart, at, ink);
    },
  };
}

type Pen = CanvasRenderingContext2D;

function stroke(pen: Pen, { colour, width, dash = [] }: { colour: string; width: number; dash?: number[] }, draw: (pen: Pen) => void): void {
  pen.save();
  pen.strokeStyle = colour;
  pen.lineWidth = width;
  pen.setLineDash(dash);
  pen.beginPath();
  draw(pen);
  pen.stroke();
  pen.restore();
}

function write(pen: Pen, text: string, { x, y, colour, bold = false, align = 'left', halo }: { x: number; y: number; colour: string; bold?: boolean; align?: CanvasTextAlign; halo?: string }): void {
  pen.save();
  pen.font = `${bold ? 700 : 400} 12px ${font.family}`;
  pen.fillStyle = colour;
  pen.textAlign = align;
  if (halo !== undefined) {
    pen.strokeStyle = halo;
    pen.lineWidth = 4;
    pen.lineJoin = 'round';
    pen.strokeText(text, x, y);
  }
  pen.fillText(text, x, y);
  pen.restore();
}

function drawTarget(chart: Chart<'line'>, target: number, { ink, targetWord }: ChartMarks): void {
  const y = chart.scales.y!.getPixelForValue(target);
  const { left, right, top, bottom } = chart.chartArea;
  if (y < top || y > bottom) return;
  stroke(chart.ctx, { colour: ink.lees, width: 1.5, dash: [5, 3] }, (pen) => (pen.moveTo(left, y), pen.lineTo(right, y)));
  if (targetWord !== '') write(chart.ctx, targetWord, { x: right, y: y - 5, colour: ink.lees, bold: true, align: 'right' });
}

function placeOf(chart: Chart<'line'>, drop: ChartDrop): [number, number] {
  return [chart.scales.x!.getPixelForValue(drop.x), chart.scales.y!.getPixelForValue(drop.y)];
}

function drawDropLine(chart: Chart<'line'>, drop: ChartDrop, ink: ChartInk): void {
  const [x, y] = placeOf(chart, drop);
  const { bottom } = chart.chartArea;
  stroke(chart.ctx, { colour: drop.chosen ? ink.slate : ink.muted, width: drop.chosen ? 2.5 : 1 }, (pen) => (pen.moveTo(x, y), pen.lineTo(x, bottom)));
}

/** About as wide as "95 %" with a gap after it. */
const wordWidth = 42;
const wordHeight = 14;

/** Words that would run into each other take turns on lines above each other, from left to right. */
export function wordLevels(places: readonly number[]): number[] {
  const levels = places.map(() => 0);
  const ends: number[] = [];
  for (const at of places.map((_, index) => index).sort((a, b) => places[a]! - places[b]!)) {
    const free = ends.findIndex((end) => end <= places[at]!);
    levels[at] = free === -1 ? ends.length : free;
    ends[levels[at]!] = places[at]! + wordWidth;
  }
  return levels;
}

/** Over the curves, on a halo of the ground, so that no dash runs through a figure. */
function drawDropWords(chart: Chart<'line'>, drop: ChartDrop, { ink, level }: { ink: ChartInk; level: number }): void {
  const [x, y] = placeOf(chart, drop);
  const { bottom } = chart.chartArea;
  chart.ctx.fillStyle = drop.chosen ? ink.slate : ink.ground;
  chart.ctx.fillRect(x - 4, y - 4, 8, 8);
  stroke(chart.ctx, { colour: ink.ink, width: 1.5 }, (pen) => pen.rect(x - 4, y - 4, 8, 8));
  write(chart.ctx, drop.text, { x: x + 5, y: bottom - 6 - level * wordHeight, colour: drop.chosen ? ink.ink : ink.muted, bold: drop.chosen, halo: ink.ground });
  if (drop.word) write(chart.ctx, drop.word, { x: x + 3, y: y - 10 - level * wordHeight, colour: drop.chosen ? ink.ink : ink.muted, bold: drop.chosen, halo: ink.ground });
}

function drawErrorBars(chart: Chart<'line'>, series: ChartSeries, ink: ChartInk): void {
  if (series.look === 'forecast') return;
  for (const point of series.points) {
    if (point.low === undefined || point.high === undefined) continue;
    const [x, low, high] = [chart.scales.x!.getPixelForValue(point.x), chart.scales.y!.getPixelForValue(point.low), chart.scales.y!.getPixelForValue(point.high)];
    const cap = series.look === 'points' ? 4 : 0;
    stroke(chart.ctx, { colour: ink.ink, width: 1.5 }, (pen) => {
      for (const end of [low, high]) {
        pen.moveTo(x - cap, end);
        pen.lineTo(x + cap, end);
      }
      pen.moveTo(x, low);
      pen.lineTo(x, chart.scales.y!.getPixelForValue(point.y) + 5);
      pen.moveTo(x, high);
      pen.lineTo(x, chart.scales.y!.getPixelForValue(point.y) - 5);
    });
  }
}

function drawEndWord(chart: Chart<'line'>, { endWord, points }: ChartSeries, ink: ChartInk): void {
  const last = points.at(-1);
  if (!endWord || !last) return;
  write(chart.ctx, endWord, { x: Math.min(chart.scales.x!.getPixelForValue(last.x) + 4, chart.chartArea.right - 24), y: chart.scales.y!.getPixelForValue(last.y) - 6, colour: ink.muted });
}

function drawRain(chart: Chart<'line'>, at: number, ink: ChartInk): void {
  const [x, y] = [chart.scales.x!.getPixelForValue(at), chart.chartArea.bottom];
  const pen = chart.ctx;
  pen.save();
  pen.fillStyle = ink.ground;
  stroke(pen, { colour: ink.ink, width: 1.5 }, (one) => {
    one.moveTo(x, y - 6);
    one.bezierCurveTo(x + 3, y - 2, x + 4, y, x + 4, y + 1);
    one.arc(x, y + 1, 4, 0, Math.PI);
    one.bezierCurveTo(x - 4, y, x - 3, y - 2, x, y - 6);
    one.fill();
  });
  pen.restore();
}
