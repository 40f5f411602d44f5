import { drawMap, drawSwatch } from './reportMap.ts';
import type { Paper } from '../paper.ts';
import { faint, heading, innerWidth, margin, openPage, paragraph, section, table, type Column } from './reportPage.ts';
import { scaleOfAdvice } from '../../../shared/analysis/layerAdvice.ts';
import { zoneSpan } from '../../../shared/catalog/zoneStyles.ts';
import { groupBy } from '../../../shared/groupBy.ts';
import { numberText } from '../../../shared/numberText.ts';
import { reportMeasures } from './reportMeasures.ts';
import { filled, reportTexts, type ReportTexts } from './reportTexts.ts';
import type { ReportLayer, ReportZone, ZoneReport } from './zoneReport.ts';

/** Points; the map takes what the words leave of one page. Lower it could not be read. */
const mapHeights = { least: 120, most: 320 };
const mapStep = 20;
const tableLine = 18;
const squareMetres = { metric: { unit: 'ha', each: 10_000 }, us: { unit: 'ac', each: 4046.8564224 } };

/**
 * The report of a zoning as PDF, for people without the program: verdict, map in the zones' colours with marks that tell them apart in grey, zones, layers, limits.
 * On one page with the highest map that leaves room for the words; where even the lowest does not, on two with a map of full height.
 */
export function zonesReport(report: ZoneReport): Promise<Buffer> {
  const words = wordsOf(report);
  const lowest = composed(report, words, mapHeights.least);
  let page = lowest;
  const isLong = pagesOf(lowest) > 1;
  const room = isLong ? Infinity : lowest.page.height - margin - lowest.y;
  for (let height = Math.min(mapHeights.most, mapHeights.least + room); height > mapHeights.least; height -= mapStep) {
    page = composed(report, words, height);
    if (isLong || pagesOf(page) === 1) break;
    page = lowest;
  }
  footers(page, report, words);
  return page.toBytes();
}

const pagesOf = (page: Paper) => page.bufferedPageRange().count;

function composed(report: ZoneReport, words: Words, mapHeight: number): Paper {
  const title = filled(words.texts.title as string, { block: report.blockName });
  const page = openPage({ size: report.size, title, at: report.today });
  page.font('bold').fontSize(20).text(title, margin, margin);
  page.font('plain').fontSize(9).fillColor(faint).text(filled(words.texts.line as string, { estate: report.estateName, number: report.number, name: report.name ? ` “${report.name}”` : '', state: stateOf(report, words), day: words.day(report.madeAt) }));
  page.moveDown(0.8);
  const verdict = verdictOf(report, words.texts);
  if (verdict) page.font('bold').fontSize(14).fillColor('#1C2B33').text(verdict);
  page.moveDown(0.4);
  const mapTop = page.y;
  drawMap(page, report, { x: margin, y: mapTop, width: innerWidth(page), height: mapHeight });
  page.x = margin;
  page.y = mapTop + mapHeight + 6;
  zoneTable(page, report, words);
  if (report.reasons.length > 0) {
    heading(page, words.texts.why as string);
    paragraph(page, [...byHandOf(report, words.texts), ...shownOf(report, words), ...reasonsOf(report, words.texts), ...numbersOf(report, words), ...differencesOf(report, words)].join(' '));
  }
  layerTable(page, report, words);
  method(page, report, words);
  limits(page, report, words);
  return page;
}

interface Words {
  texts: ReportTexts;
  figure: (value: number, decimals: number) => string;
  day: (at: Date) => string;
  length: (metres: number, decimals: number) => string;
  /** The smallest patch with its unit. */
  patch: string;
}

function wordsOf({ language: spoken, units, timeZone, smallestPatchHa }: ZoneReport): Words {
  // English dates are written as where the units come from.
  const language = spoken === 'en' && units === 'metric' ? 'en-GB' : spoken;
  const figure = (value: number, decimals: number) => numberText(value, decimals, language);
  return {
    texts: reportTexts[spoken],
    figure,
    day: (at) => new Intl.DateTimeFormat(language, { dateStyle: 'long', timeZone }).format(at),
    patch: `${figure((smallestPatchHa * 10_000) / squareMetres[units].each, 2)}\u00A0${squareMetres[units].unit}`,
    length: (metres, decimals) => (units === 'us' ? `${figure(metres / 0.3048, decimals)}\u00A0ft` : `${figure(metres, decimals)}\u00A0m`),
  };
}

function stateOf({ state, pastSeason }: ZoneReport, { texts }: Words): string {
  if (state === 'live' && pastSeason !== null) return filled(texts.liveIn as string, { season: pastSeason });
  return (texts.stateOf[state] ?? state).toLowerCase();
}

function verdictOf({ verdict, isJudged, advisedZones }: ZoneReport, texts: ReportTexts): string | null {
  if (verdict === null) return null;
  const count = advisedZones ?? 1;
  const text = verdict === 'one' || count > 1 ? texts.verdict[verdict]! : texts.verdict[`${verdict}One`]!;
  const said = filled(text, { zones: texts.inWords[count - 1] ?? count });
  return isJudged ? said : `${said} ${texts.verdict.notJudged}`;
}

/** That the zones are not those that were computed, where that is so. */
function byHandOf({ beginsByHand, handEdits }: ZoneReport, texts: ReportTexts): string[] {
  if (beginsByHand) return [texts.byHandBefore as string];
  return handEdits > 0 ? [filled(texts.byHand as string, { n: handEdits })] : [];
}

/** That other zones are shown than those advised, and what is to be known of them before they are used. */
function shownOf({ shown, advisedZones, warnings, layers }: ZoneReport, { texts, figure }: Words): string[] {
  const other = advisedZones !== null && shown !== advisedZones ? [filled(texts.shownOther as string, { shown, advised: advisedZones })] : [];
  const said = warnings.map(({ code, about, figures }) => {
    const named = Object.entries(figures).map(([name, value]) => [name, shares.has(name) ? `${figure(100 * (value ?? 0), 0)}\u00A0%` : figure(value ?? 0, 0)]);
    return filled(texts.warning[code] ?? '', { ...Object.fromEntries(named), about: layers.find(({ layerId }) => layerId === about)?.name ?? '' });
  });
  return [...other, ...said.filter((text) => text !== '')];
}

const shares = new Set(['coverage', 'share']);

/** One sentence a reason; several measures that say the same are named in one. */
function reasonsOf({ reasons, layers, language, advisedZones, fruitZones }: ZoneReport, texts: ReportTexts): string[] {
  const nameOf = (about: string) => layers.find(({ layerId }) => layerId === about)?.name ?? reportMeasures[language][about] ?? about;
  const list = new Intl.ListFormat(language === 'en' ? 'en-GB' : language, { type: 'conjunction' });
  // What fruit confirms comes before what it does not show.
  const isSilent = ({ code }: { code: string }) => code === 'fruit-silent';
  const inOrder = [...reasons.filter((reason) => !isSilent(reason)), ...reasons.filter(isSilent)];
  return [...groupBy(inOrder, ({ code }) => code)]
    .map(([code, same]) => filled((fruitZones === advisedZones ? undefined : texts.tried[code]) ?? texts.reason[code] ?? '', { zones: filled(texts.zonesN, { n: fruitZones ?? 1 }), about: list.format(same.flatMap(({ about }) => (about === null ? [] : [nameOf(about)]))) }))
    .filter((text) => text !== '');
}

function numbersOf({ numbers }: ZoneReport, { texts, figure }: Words): string[] {
  const share = (value: number) => `${figure(100 * value, 0)}\u00A0%`;
  return numbers.map(({ code, k, share: of, ownShare }) => filled(texts.number[code], { zones: filled(texts.zonesN, { n: k }), share: share(of), own: share(ownShare) }));
}

function differencesOf({ differences, layers, zones }: ZoneReport, { texts, figure }: Words): string[] {
  if (zones.length < 2) return [];
  return differences.flatMap(({ layerId, lowest, highest, withinSd }) => {
    const layer = layers.find((candidate) => candidate.layerId === layerId);
    // One that had no vote explains nothing.
    if (!layer || layer.weight === 0) return [];
    const unit = layer.unit ? `\u00A0${layer.unit}` : '';
    return [filled(texts.difference as string, { layer: layer.name, lowest: figure(lowest, layer.decimals), highest: figure(highest, layer.decimals), within: figure(withinSd, layer.decimals), unit })];
  });
}

/** Layers that the table of zones has room for. */
const shownLayers = 2;

function zoneTable(page: Paper, report: ZoneReport, { texts, figure }: Words): void {
  const { unit, each } = squareMetres[report.units];
  const sum = (of: (zone: ReportZone) => number) => report.zones.reduce((all, zone) => all + of(zone), 0);
  const total = sum(({ areaM2 }) => areaM2);
  const layers = report.layers.filter((layer) => layer.weight > 0 && !layer.isClass).slice(0, shownLayers);
  const hasDoubt = tellsDoubt(report);
  const columns: Column[] = [
    { head: texts.zone as string, share: hasDoubt ? 5 : 4 },
    { head: `${texts.area as string}, ${unit}`, share: 2.4, isFigure: true },
    { head: `${texts.share as string}, %`, share: 2, isFigure: true },
    { head: texts.vines as string, share: 2, isFigure: true },
    { head: texts.missing as string, share: 2.6, isFigure: true },
    ...(hasDoubt ? [{ head: `${texts.doubtful as string}, %`, share: 2.4, isFigure: true }] : []),
    ...layers.map((layer) => ({ head: layer.unit ? `${layer.name}, ${layer.unit}` : layer.name, share: 3, isFigure: true })),
  ];
  const lines = report.zones.map((zone) => [
    zone.name ? `${zone.number}  ${zone.name}` : filled(texts.zoneN as string, { n: zone.number }),
    figure(zone.areaM2 / each, 2),
    figure((100 * zone.areaM2) / total, 0),
    figure(zone.vines, 0),
    figure(zone.missing, 0),
    ...(hasDoubt ? [zone.doubtfulShare === null ? '–' : figure(100 * zone.doubtfulShare, 0)] : []),
    ...layers.map((layer) => meanOf(zone.means.find(({ layerId }) => layerId === layer.layerId), layer, figure)),
  ]);
  const whole = [report.blockName, figure(total / each, 2), figure(100, 0), figure(sum(({ vines }) => vines), 0), figure(sum(({ missing }) => missing), 0), ...(hasDoubt ? [''] : []), ...layers.map(() => '')];
  heading(page, texts.zones as string);
  table(page, columns, report.zones.length > 1 ? [...lines, whole] : lines, { width: 30, draw: (line, x, y) => line < report.zones.length && drawSwatch(page, { zone: report.zones[line]!, count: zoneSpan(report.zones) }, { x, y: y + 1, width: 22, height: 10 }) });
  if (!hasDoubt) return;
  page.moveDown(0.4);
  paragraph(page, texts.doubtfulMeans as string);
}

/** One zone has no other that it could fit. */
function tellsDoubt({ zones }: ZoneReport): boolean {
  return zones.length > 1 && zones.some(({ doubtfulShare }) => doubtfulShare !== null);
}

function meanOf(stats: { mean: number | null; sd: number | null } | undefined, layer: ReportLayer, figure: Words['figure']): string {
  if (!stats || stats.mean === null) return '–';
  return stats.sd === null ? figure(stats.mean, layer.decimals) : `${figure(stats.mean, layer.decimals)} ± ${figure(stats.sd, layer.decimals)}`;
}

function layerTable(page: Paper, report: ZoneReport, { texts, figure, day }: Words): void {
  if (report.layers.length === 0) return;
  // A few lines stay together with their heads.
  heading(page, texts.layers as string, 60 + tableLine * report.layers.length);
  const columns: Column[] = [{ head: texts.layer as string, share: 6 }, { head: texts.measuredOn as string, share: 4 }, { head: texts.weight as string, share: 1.6, isFigure: true }, { head: texts.advised as string, share: 2.6, isFigure: true }, { head: texts.between as string, share: 3, isFigure: true }];
  const betweenOf = (layerId: string) => (report.zones.length > 1 ? report.differences.find((difference) => difference.layerId === layerId)?.explained : null) ?? null;
  const scale = scaleOfAdvice(report.layers);
  table(page, columns, report.layers.map((layer) => [
    layer.isContext ? `${layer.name} (${texts.context as string})` : layer.name,
    layer.measuredOn === null ? '–' : day(new Date(`${layer.measuredOn}T12:00:00Z`)),
    figure(layer.weight, 2),
    layer.advised === null ? '–' : figure(layer.advised * scale, 2),
    layer.isClass || betweenOf(layer.layerId) === null ? '–' : figure(100 * betweenOf(layer.layerId)!, 0),
  ]));
  page.moveDown(0.4);
  paragraph(page, [...(report.zones.length > 1 ? [texts.betweenMeans] : []), ...alikeOf(report, texts, figure)].join(' '));
  for (const layer of report.layers) if (layer.override) paragraph(page, filled(texts.override as string, { layer: layer.name, ...layer.override }));
}

/** The two layers that repeat each other most. */
function alikeOf({ layerPairs, layers }: ZoneReport, texts: ReportTexts, figure: Words['figure']): string[] {
  const [most] = [...layerPairs].sort((a, b) => Math.abs(b.correlation) - Math.abs(a.correlation));
  const nameOf = (id: string) => layers.find(({ layerId }) => layerId === id)?.name;
  const [one, other] = most ? [nameOf(most.one), nameOf(most.other)] : [];
  return most && one && other ? [filled(texts.alike as string, { one, other, correlation: figure(most.correlation, 2) })] : [];
}

function method(page: Paper, report: ZoneReport, { texts, length, patch }: Words): void {
  const made = filled(texts.method as string, { cell: length(report.cellSizeM, 1), smoothing: length(report.smoothingM, 1), patch });
  section(page, texts.how as string, [
    made,
    ...(report.standardise === 'robust' ? [texts.robust] : []),
    ...(report.principalComponents ? [texts.components] : []),
    ...(report.together.length > 0 ? [filled(texts.together as string, { blocks: new Intl.ListFormat(report.language).format(report.together) })] : []),
    ...(report.borders === 'free' ? [] : [texts[report.borders]]),
  ].join(' '));
}

function limits(page: Paper, report: ZoneReport, { texts, length }: Words): void {
  const tested = report.reasons.some(({ code }) => code.startsWith('fruit-'));
  section(page, texts.limits as string, [texts.saysNothing, ...(tested ? [] : [texts.untested]), filled(texts.border as string, { cell: length(report.cellSizeM, 1) }), texts.estimate].join(' '));
}

/** The same foot on every page, written when the number of pages is known. */
function footers(page: Paper, report: ZoneReport, { texts, day, length, patch }: Words): void {
  const text = filled(texts.footer as string, { today: day(report.today), engine: report.engineVersion, seed: report.seed, smoothing: length(report.smoothingM, 1), patch });
  const { start, count } = page.bufferedPageRange();
  for (let at = start; at < start + count; at++) {
    page.switchToPage(at);
    // The foot lies in the margin, where text would begin a new page.
    page.page.margins.bottom = 0;
    page.font('plain').fontSize(7.5).fillColor(faint).text(`${text}  ${at + 1}/${count}`, margin, page.page.height - 36, { width: innerWidth(page), lineBreak: false });
  }
}
