import type { PlanBasis } from '../../../shared/contracts/planBasis.ts';
import { planChoices } from '../../../shared/contracts/planChoices.ts';
import type { XY } from '../../../shared/geo/coordinates.ts';
import { questionOf, secondsAtVine } from '../../../shared/sampling/plan.ts';
import { alleySides, sideFor } from '../../../shared/sampling/rowSide.ts';
import type { Terrain } from '../../../shared/sampling/terrain.ts';
import { Unusable } from '../../errors.ts';
import type { ShareInput } from '../../ground/shareRound.ts';
import type { Plan } from '../../models/Plan.ts';
import type { Target } from '../../models/Target.ts';
import type { PlanGround } from './planGround.ts';
import { sampledZones } from './standingOfPlan.ts';
import { say } from '../../sentences/say.ts';

/** The vines of a plan as a walk takes them, with the seconds that the plan allows at each. */
export function shareInputOf({ ground }: PlanGround, plan: Plan, targets: readonly Target[], how: { gateXY: XY; people: number; end: 'gate' | 'anywhere'; terrain: Terrain | null }): ShareInput {
  const { basis } = plan.result as { basis: PlanBasis };
  const choices = planChoices.parse(plan.options);
  const secondsAt = secondsAtVine(questionOf(basis, choices));
  const { sampledZoneOf } = sampledZones(plan);
  const sides = alleySides(ground.rows.frame, basis.measures);
  const vines = targets.map(({ rowId, ordinal, zoneId, measureCodes }) => {
    const zone = sampledZoneOf.get(zoneId) ?? 0;
    return { rowIndex: ground.rowIndexOf.get(rowId) ?? -1, ordinal, zone, side: sideFor(measureCodes, sides), serviceS: secondsAt(zone, measureCodes) };
  });
  if (vines.some(({ rowIndex }) => rowIndex < 0)) throw new Unusable('rowsChanged', say('rowsChanged', { block: ground.block.name }));
  return { rows: ground.rows, vines, pace: choices.pace, ...how };
}
