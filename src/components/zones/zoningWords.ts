import { numberNotes } from '../../../shared/analysis/numberNotes.ts';
import { zoneDifferences } from '../../../shared/analysis/zoningStats.ts';
import { scaleOfAdvice } from '../../../shared/analysis/layerAdvice.ts';
import { layerType } from '../../../shared/catalog/layerTypes.ts';
import type { ZoningLine, ZoningView } from '../../../shared/contracts/zonings.ts';
import { thinSpace } from '../../../shared/numberText.ts';
import type { Format } from '../../lib/format.ts';

type Layer = ZoningView['layers'][number];
type Translate = (key: string, named?: Record<string, unknown>, plural?: number) => string;

export interface Verdict {
  readonly answer: string;
  readonly rest: string;
  readonly below: string;
}

/** The verdict as a person says it: the answer, why, and what is not known. `zoning.zones`: those that stand on the screen. */
export function verdictWords(zoning: ZoningView, { t, format }: { t: Translate; format: Format }): Verdict {
  const count = Math.max(1, zoning.advisedZones ?? 1);
  const answer = !zoning.isJudged ? t('zones.verdict.notJudged') : t(`zones.verdict.${zoning.verdict ?? 'test'}`, { zones: t(`zones.inWords.${count}`) }, count);
  const codes = new Set(zoning.reasons.map((reason) => reason.code));
  const first = ['no-measured-layer', 'stands-out', 'stands-out-apart', 'no-structure', 'plateaus', 'slope-only'].find((code) => codes.has(code));
  const fruit = ['fruit-agrees', 'fruit-disagrees', 'fruit-unclear', 'few-readings', 'readings-in-one-zone', 'not-tested-on-fruit'].find((code) => codes.has(code));
  const silent = codes.has('fruit-silent') ? 'fruit-silent' : undefined;
  const sentences = [first, fruit, silent].flatMap((code) => (code ? [reasonWords(zoning, code, { t, format })] : []));
  const also = ['too-small', 'stripes-evened', 'one-layer'].filter((code) => codes.has(code)).map((code) => reasonWords(zoning, code, { t, format }));
  return { answer, rest: sentences.join(' '), below: [...also, differenceWords(zoning, { t, format }), t('zones.saysNothing')].filter((text) => text !== '').join(' ') };
}

/** What is doubtful about the advised number, and what speaks for another; empty where there is nothing to say. */
export function numberWords({ advisedZones, alsoOffer, evidence }: ZoningView, { t, format }: { t: Translate; format: Format }): string {
  return numberNotes(advisedZones, alsoOffer, evidence)
    .map(({ code, k, share, ownShare }) => t(`zones.number.${code}`, { zones: t('zones.count', { n: k }, k), share: format.percent(share), own: format.percent(ownShare) }))
    .join(' ');
}

const shares = new Set(['coverage', 'limit', 'share']);

/** Slope and aspects are made from a height model and bear its name: each says which of them it is. */
export function layerName({ name, type }: Pick<Layer, 'name' | 'type'>, t: Translate): string {
  return layerType(type).derived ? `${name}, ${t(`zones.layerType.${type}`)}` : name;
}

/** In which state a run is; where its zones are in force for a season that is over, for which. */
export function stateWords({ state, isStopped, pastSeason }: Pick<ZoningLine, 'state' | 'isStopped' | 'pastSeason'>, t: Translate): string {
  if (state === 'live' && pastSeason !== null) return t('zones.liveIn', { season: pastSeason });
  return t(`zones.stateOf.${isStopped ? 'stopped' : state}`);
}

/** What a draft began with, before anybody changed it by hand. */
export function startWords({ takenUpFrom, beginsByHand, beginsWith }: Pick<ZoningView, 'takenUpFrom' | 'beginsByHand' | 'beginsWith'>, t: Translate): string {
  if (takenUpFrom === null) return t('zones.editor.start', { n: beginsWith ?? 1 }, beginsWith ?? 1);
  return t(beginsByHand ? 'zones.editor.startByHand' : 'zones.editor.startTaken', { n: takenUpFrom });
}

/** What a person should know before using the zones, a sentence each. */
export function warningWords({ warnings, layers }: Pick<ZoningView, 'warnings' | 'layers'>, { t, format }: { t: Translate; format: Format }): string[] {
  return warnings.map(({ code, about, figures }) => {
    const named = Object.entries(figures).map(([name, value]) => [name, value === null ? '' : shares.has(name) ? format.percent(value) : format.number(value)]);
    return t(`zones.warning.${code}`, { ...Object.fromEntries(named), about: nameIn(layers, about, t) ?? '' });
  });
}

/** One sentence why a layer's weight is advised; empty for runs of before. */
export function adviceWords({ advised }: Layer, layers: readonly Layer[], { t, format }: { t: Translate; format: Format }): string {
  if (!advised) return '';
  const { code, about, figures } = advised;
  const isUnknown = code === 'context-off' && figures.correlation === undefined;
  // Edges of terrain and maps are compared with those of all measured layers together.
  const beside = layers.filter(({ layerId, role }) => (code === 'context-offered' ? role === 'evidence' : layerId === about));
  return t(`zones.advice.${isUnknown ? 'context-unknown' : code}`, { about: format.list(beside.map((layer) => layerName(layer, t))), correlation: format.number(figures.correlation ?? 0, 2), structure: format.number(figures.structure ?? 0, 2), clearest: format.number(figures.clearest ?? 0, 2) });
}

/** The advised weight where it was not followed, on the scale of the weights that were given; else null. */
export function overruledAdvice({ advised, weight }: Layer, layers: readonly Layer[]): number | null {
  if (!advised) return null;
  const here = advised.weight * scaleOfAdvice(layers.map((layer) => ({ weight: layer.weight, advised: layer.advised?.weight ?? null })));
  return Math.abs(here - weight) > 0.005 ? here : null;
}

/** How far zones agree: the same for every vine, else by the adjusted Rand index in five steps of our own. */
export function agreementWord({ adjustedRand, vinesApart }: { adjustedRand: number; vinesApart: number }): 'identical' | 'same' | 'much' | 'partly' | 'little' | 'chance' {
  if (vinesApart === 0) return 'identical';
  const steps = [[0.9, 'same'], [0.65, 'much'], [0.4, 'partly'], [0.15, 'little']] as const;
  return steps.find(([least]) => adjustedRand >= least)?.[1] ?? 'chance';
}

/** What to do with the agreement of zones with those of another season. */
export function agreementAct(compared: Parameters<typeof agreementWord>[0]): 'keep' | 'walk' | 'anew' {
  const word = agreementWord(compared);
  return word === 'partly' ? 'walk' : word === 'little' || word === 'chance' ? 'anew' : 'keep';
}

function nameIn(layers: readonly Layer[], id: string | null, t: Translate): string | undefined {
  const layer = layers.find(({ layerId }) => layerId === id);
  return layer && layerName(layer, t);
}

const triedCodes = new Set(['fruit-agrees', 'fruit-unclear', 'fruit-disagrees']);

function reasonWords(zoning: ZoningView, code: string, { t, format }: { t: Translate; format: Format }): string {
  const reason = zoning.reasons.find((candidate) => candidate.code === code)!;
  const figures = Object.fromEntries(Object.entries(reason.figures).map(([name, value]) => [name, value === null ? '' : format.number(value, 2)]));
  const nameOf = (id: string) => nameIn(zoning.layers, id, t) ?? t(`zones.fruit.${id}`);
  const about = format.list(zoning.reasons.flatMap((other) => (other.code === code && other.about !== null ? [nameOf(other.about)] : [])));
  // A block that is one, or a number that was fixed: fruit was asked about other zones than those advised.
  const tried = zoning.fruitZones !== null && zoning.fruitZones !== zoning.advisedZones && triedCodes.has(code) ? t('zones.count', { n: zoning.fruitZones }, zoning.fruitZones) : null;
  if (tried !== null) return t(`zones.tried.${code}`, { about, zones: tried });
  return t(`zones.reason.${code}`, { ...figures, ground: format.withUnit('area', reason.figures.hectares ?? 0, 2), about });
}

/** Size of the difference between zones, in the unit of the first layer that voted: a clear border may still divide two kinds of the same. */
function differenceWords({ layers, zones }: ZoningView, { t, format }: { t: Translate; format: Format }): string {
  const measured = layers.filter(({ type }) => layerType(type).resampling === 'mean');
  const layer = measured.find(({ weight }) => weight > 0) ?? measured[0];
  const [difference] = layer ? zoneDifferences(zones, [layer.layerId]) : [];
  if (!difference || !layer || zones.length < 2) return '';
  const { decimals } = layerType(layer.type);
  const unit = layer.unit === '' ? '' : `${thinSpace}${layer.unit}`;
  return t('zones.difference', { layer: layerName(layer, t), lowest: format.number(difference.lowest, decimals), highest: format.number(difference.highest, decimals), unit, within: format.number(difference.withinSd, decimals) });
}
