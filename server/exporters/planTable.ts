import Papa from 'papaparse';
import type { PlanView } from '../../shared/contracts/plans.ts';

/** Target vines of a plan as a table, one line a vine in walking order. Text that a spreadsheet would run is disarmed. */
export function planTable(plan: PlanView): string {
  const zones = new Map(plan.basis.zones.map(({ number, name }) => [number, name]));
  const lines = plan.targets.map((target) => ({
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
    longitude: target.position[0].toFixed(7),
    latitude: target.position[1].toFixed(7),
    target_id: target.id,
  }));
  return `\uFEFF${Papa.unparse(lines, { escapeFormulae: true, newline: '\r\n' })}\r\n`;
}
