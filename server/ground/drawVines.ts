import type { PaceChoices } from '../../shared/contracts/planChoices.ts';
import { drawPlan, type PlanDraw, type PlanDrawRequest } from '../../shared/sampling/drawPlan.ts';
import { secondsAtVine, type TimesAtVine } from '../../shared/sampling/plan.ts';
import { pacedGround, type Terrain } from '../../shared/sampling/terrain.ts';

/** A draw in plain data, so that it can cross to a compute thread. */
export interface DrawInput extends Omit<PlanDrawRequest, 'secondsAt' | 'ground'> {
  readonly times: TimesAtVine;
  readonly pace: PaceChoices;
  readonly terrain: Terrain | null;
}

/** Target vines of a plan and the exact walk past them. */
export function drawVines({ times, pace, terrain, ...rest }: DrawInput): PlanDraw {
  return drawPlan({ ...rest, secondsAt: secondsAtVine(times), ground: pacedGround(pace, terrain) });
}
