import type { Point } from 'geojson';
import { decodeLabels } from '../../../shared/analysis/cellBytes.ts';
import type { BasisZone } from '../../../shared/contracts/planBasis.ts';
import { drawChoices, type DrawChoices } from '../../../shared/contracts/planChoices.ts';
import type { XY } from '../../../shared/geo/coordinates.ts';
import { toUtm } from '../../../shared/geo/utm.ts';
import { eligibleVines } from '../../../shared/sampling/eligible.ts';
import { vinesNearBorder } from '../../../shared/sampling/eligibleBorder.ts';
import { Unusable } from '../../errors.ts';
import { gridOf, isBearing, loadBlockVines, zonesOfVines, type BlockVines } from '../../ground/blockVines.ts';
import { asGeoJson } from '../../models/geometry.ts';
import { Block } from '../../models/Block.ts';
import { Zone } from '../../models/Zone.ts';
import { Zoning } from '../../models/Zoning.ts';
import { say } from '../../sentences/say.ts';

/** A zoned block as plans and walks take it. */
export interface PlanGround {
  zoning: Zoning;
  ground: BlockVines;
  zoneOf: Uint8Array;
  unusable: Uint8Array;
  /** Null where vines may be drawn up to the borders of zones. */
  nearBorder: Uint8Array | null;
  zones: BasisZone[];
  /** Vines that may be drawn, row by row: under the rule, or all bearing vines of zones where it leaves too few. */
  drawable: number[];
  gateXY: XY;
  /** True when the block names no gate, so that walks begin at the start post of its first row. */
  isGateAssumed: boolean;
}

/** Loads what a plan stands on. Refuses zonings without labels and zonings made on an outline since changed. */
export async function loadPlanGround(estateId: string, zoningId: string, draw: DrawChoices = drawChoices.parse({})): Promise<PlanGround> {
  const zoning = await Zoning.query().findOne({ estateId, id: zoningId }).throwIfNotFound();
  const ground = await loadBlockVines(estateId, zoning.blockId);
  const name = ground.block.name;
  if (ground.vines.count === 0) throw new Unusable('noRows', say('noRowsToSample', { block: name }));
  const zoneRows = await Zone.query().where({ estateId, zoningId }).orderBy('number').select('id', 'number', 'name', 'colour');
  if (zoning.labels === null || zoneRows.length === 0) throw new Unusable('noZones', say('noZonesToSample', { number: zoning.number, block: name }));
  const grid = gridOf(ground);
  if (zoning.gridKey !== grid.key) throw new Unusable('zoningOutOfDate', say('zoningOutOfDate', { block: name, number: zoning.number }));
  const zoneOf = zonesOfVines(ground, zoning);
  const unusable = Uint8Array.from(ground.states, (state) => (state === null || state === 'sick' ? 0 : 1));
  const nearBorder = draw.borderM === 0 ? null : vinesNearBorder({ grid, labels: decodeLabels(zoning.labels) }, { ...ground.vines, zoneOfVine: zoneOf }, draw.borderM ?? undefined);
  const found = zoneRows.map(({ id, number, name: zoneName, colour }) => ({ zone: { id, number, name: zoneName, colour }, ...vinesOfZone({ ground, zoneOf, unusable, nearBorder, draw }, number) })).filter(({ bearing }) => bearing > 0);
  if (found.length === 0) throw new Unusable('noVines', say('noVines', { block: name }));
  const zones = found.map(({ zone, bearing, drawable }): BasisZone => ({ ...zone, vines: bearing, eligible: drawable.length }));
  const drawable = found.flatMap((one) => one.drawable).sort((a, b) => a - b);
  return { zoning, ground, zoneOf, unusable, nearBorder, zones, drawable, ...(await gateOf(estateId, ground)) };
}

function vinesOfZone({ ground, zoneOf, unusable, nearBorder, draw }: Pick<PlanGround, 'ground' | 'zoneOf' | 'unusable' | 'nearBorder'> & { draw: DrawChoices }, zone: number): { bearing: number; drawable: number[] } {
  const candidates: number[] = [];
  zoneOf.forEach((of, vine) => of === zone && candidates.push(vine));
  const bearing = candidates.filter((vine) => isBearing(ground.states[vine]!));
  const strict = eligibleVines({ table: ground.vines, candidates, unusable, rule: draw, ...(nearBorder ? { nearBorder } : {}) }, 0).vines;
  // Rules are relaxed before a draw comes up short, so a narrow zone can still give its bearing vines.
  return { bearing: bearing.length, drawable: strict.length >= 2 ? [...strict] : bearing };
}

async function gateOf(estateId: string, ground: BlockVines): Promise<Pick<PlanGround, 'gateXY' | 'isGateAssumed'>> {
  const { gate } = await Block.query().findOne({ estateId, id: ground.block.id }).select(asGeoJson('gate', 9).as('gate')).throwIfNotFound();
  if (gate === null) return { gateXY: ground.rows.rows[0]!.pieces[0]!.fromXY, isGateAssumed: true };
  const [lon, lat] = (gate as Point).coordinates as [number, number];
  return { gateXY: toUtm([lon, lat], ground.block.epsg), isGateAssumed: false };
}
