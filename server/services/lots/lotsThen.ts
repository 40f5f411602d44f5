import type { TankView } from '../../../shared/contracts/lots.ts';
import { FactorSwitch } from '../../models/FactorSwitch.ts';
import { Lot } from '../../models/Lot.ts';
import { LotHistory } from '../../models/LotHistory.ts';
import { Tank } from '../../models/Tank.ts';
import type { Run } from './boardGround.ts';

/** Lots of a scenario with their vines, tanks and switched-on factors as they stood at a moment. */
export interface LotsThen {
  lots: Lot[];
  runs: Run[];
  tanks: TankView[];
  switches: FactorSwitch[];
}

type Body = Record<string, unknown>;

export async function lotsThen(estateId: string, scenarioId: string, until: Date): Promise<LotsThen> {
  const newest = await LotHistory.query()
    .where({ estateId })
    .whereIn('subject', ['lots', 'lot_parts', 'lot_row_runs', 'tanks', 'factor_switches'])
    .where('at', '<=', until)
    .distinctOn('subject', 'rowId')
    .orderBy(['subject', 'rowId', { column: 'id', order: 'desc' }]);
  const of = (subject: string) => newest.filter((row) => row.subject === subject && !row.gone).map(({ body }) => inCamel(body));
  const lots = of('lots').filter((body) => body.scenarioId === scenarioId).map((body) => Lot.fromDatabaseJson(body)).sort((a, b) => String(a.createdAt).localeCompare(String(b.createdAt)));
  const lotOfPart = new Map(of('lot_parts').map((body) => [body.id, body.lotId]));
  const runs = of('lot_row_runs').filter((body) => body.scenarioId === scenarioId).map((body) => ({ lotId: String(lotOfPart.get(body.lotPartId)), rowId: String(body.rowId), ...endsOf(String(body.vines)) }));
  const tanks = of('tanks')
    .map((body) => Tank.fromDatabaseJson(body))
    .filter(({ retiredAt }) => retiredAt === null)
    .map(({ id, name, litres, workingFill, minimumFill }) => ({ id, name, litres, workingFill, minimumFill }))
    .sort((a, b) => a.name.localeCompare(b.name));
  return { lots, runs, tanks, switches: of('factor_switches').map((body) => FactorSwitch.fromDatabaseJson(body)) };
}

/** "[3,9)", as the database writes a range of whole numbers: both ends included. */
function endsOf(range: string): { from: number; to: number } {
  const [from, after] = range.slice(1, -1).split(',').map(Number);
  return { from: from!, to: after! - 1 };
}

function inCamel(body: Body): Body {
  return Object.fromEntries(Object.entries(body).map(([key, value]) => [key.replace(/_(\w)/g, (_, letter: string) => letter.toUpperCase()), value]));
}
