import type { Figure, LotView, TankView } from '../../../shared/contracts/lots.ts';
import { sumFigures, type SharingFigure } from '../../../shared/cellar/dependent.ts';
import { fitTank, type TankFit } from '../../../shared/cellar/tankFit.ts';
import type { Format } from '../../lib/format.ts';
import { decimalsOf, shownValue, type Quantity } from '../../lib/units.ts';
import type { Evidence } from '../base/evidence.ts';

/** A figure in the reader's units as evidence; on lots it is always an estimate unless it was measured outright. */
export function evidenceOf(figure: Figure, how: { format: Format; quantity?: Quantity; unit?: string; decimals?: number }): Evidence {
  const { format, quantity } = how;
  const shown = (value: number) => (quantity ? shownValue(quantity, value, format.units) : value);
  return {
    value: shown(figure.value),
    halfWidth: figure.halfWidth === null ? null : shown(figure.halfWidth),
    unit: quantity ? format.unit(quantity) : (how.unit ?? ''),
    decimals: how.decimals ?? (quantity ? decimalsOf(quantity, format.units) : 1),
    n: figure.n,
    confidence: figure.confidence,
    kind: figure.kind,
  };
}

/** "9 920 ± 1 200", or the value alone when it has no range. */
export function figureText(figure: Figure, how: { format: Format; quantity?: Quantity; decimals?: number }): string {
  const { value, halfWidth, decimals } = evidenceOf(figure, how);
  // Litres are told no finer than their range: two figures of the half-width.
  if (how.quantity === 'volume' && halfWidth !== null && halfWidth >= 10) {
    const step = 10 ** (Math.floor(Math.log10(halfWidth)) - 1);
    return how.format.estimate(Math.round(value / step) * step, Math.round(halfWidth / step) * step, 0);
  }
  return halfWidth === null ? how.format.number(value, decimals) : how.format.estimate(value, halfWidth, decimals);
}

/** A chance without false certainty: never 0 or 100 %. */
export function chanceText(chance: number, format: Format): string {
  if (chance > 0.99) return `> ${format.percent(0.99)}`;
  return chance < 0.01 ? `< ${format.percent(0.01)}` : format.percent(chance);
}

export interface TankLoad {
  readonly tank: TankView;
  readonly lots: readonly LotView[];
  /** Must of all lots in the tank; null while it is empty or nothing is known. */
  readonly must: { readonly value: number; readonly low: number; readonly high: number } | null;
  readonly fit: TankFit | null;
  /** The must with what it shares with other tanks. */
  readonly sum: SharingFigure | null;
}

/** What goes into each tank: lots that share a tank are added up. */
export function tankLoads(tanks: readonly TankView[], lots: readonly LotView[]): TankLoad[] {
  return tanks.map((tank) => {
    const inside = lots.filter((lot) => lot.tankId === tank.id && lot.summary.mustL !== null);
    if (inside.length === 0) return { tank, lots: [], must: null, fit: null, sum: null };
    const sum = sumFigures(inside.map((lot) => ({ factor: 1, figure: lot.summary.mustL! })));
    const { value, halfWidth: half } = sum;
    // Of a lot by itself the server knows how few readings stand behind its litres.
    const told = inside.length === 1 && inside[0]!.summary.tank ? inside[0]!.summary.tank : {};
    const fit = { ...fitTank({ value, standardError: sum.standardError, df: Infinity }, { volumeL: tank.litres, fillShare: tank.workingFill, minimumL: tank.litres * tank.minimumFill }), ...told };
    return { tank, lots: inside, must: { value, low: Math.max(0, value - half), high: value + half }, fit, sum };
  });
}

export interface TankChance {
  readonly chance: number;
  readonly tank: string;
  /** Names of lots that go into the same tank. */
  readonly others: readonly string[];
}

/** The chance that a lot fits its tank together with whatever else goes into it; null without a tank or must. */
export function tankChance(lot: LotView, tanks: readonly TankView[], lots: readonly LotView[]): TankChance | null {
  if (lot.summary.tank === null) return null;
  const load = tankLoads(tanks, lots).find(({ tank }) => tank.id === lot.tankId);
  const others = load?.lots.filter(({ id }) => id !== lot.id).map(({ name }) => name) ?? [];
  return { chance: others.length > 0 ? load!.fit!.chanceOfFit : lot.summary.tank.chanceOfFit, tank: lot.summary.tank.name, others };
}

type Translate = (key: string, named?: Record<string, unknown>) => string;

/** That chance in words, with the lots that go into the same tank. */
export function tankWords(found: TankChance | null, { t, format }: { t: Translate; format: Format }): string {
  if (found === null) return t('lots.noTank');
  const { chance, tank, others } = found;
  return t(others.length > 0 ? 'lots.fitsTogether' : 'lots.fitsIn', { chance: chanceText(chance, format), tank, others: format.list(others) });
}
