import type { PlanView } from '../../shared/contracts/plans.ts';
import { tableText, type TableCell } from './tableText.ts';

const fields = ['walk_order', 'block', 'zone', 'zone_name', 'row', 'vine', 'reserve_row', 'reserve_vine', 'measures', 'draw_order', 'longitude', 'latitude', 'target_id'];

/** Target vines of a plan as a table, one line a vine in walking order, as a spreadsheet of the reader's language opens it. */
export function planTable(plan: PlanView, language: string): string {
  const zones = new Map(plan.basis.zones.map(({ number, name }) => [number, name]));
  const lines = plan.targets.map((target): Record<string, TableCell> => ({
    walk_order: target.walkOrder,
    block: plan.blockName,
    zone: target.zone,
    zone_name: zones.get(target.zone) ?? '',
    row: target.rowLabel,
    vine: target.vineNumber,
    reserve_row: target.reserve?.rowLabel ?? '',
    reserve_vine: target.reserve?.vineNumber ?? '',
    measures: target.measures.join(' '),
    draw_order: target.drawOrder,
    longitude: { value: target.position[0], decimals: 7 },
    latitude: { value: target.position[1], decimals: 7 },
    target_id: target.id,
  }));
  return tableText(fields, lines, language);
}
