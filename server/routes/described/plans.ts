import { z } from 'zod';
import { planBasis } from '../../../shared/contracts/planBasis.ts';
import { basisQuestion, newPlan, planChange, planRedraw } from '../../../shared/contracts/planChoices.ts';
import { dayQuestion, dayWalk, planWalk, walkQuestion } from '../../../shared/contracts/planWalks.ts';
import { divisionQuestion, earlierPlan, planList, planStanding, planSummary, planView, zoneDivision } from '../../../shared/contracts/plans.ts';
import { ofBlock } from '../../../shared/contracts/queries.ts';
import { planExport } from '../plans.ts';
import { belowEstate, listOf, type Operations } from './operation.ts';

/** Sampling plans and their walks. */
export const plans: Operations = belowEstate({
  'get /zonings/:zoningId/plan-basis': { does: 'What a plan on these zones is computed from', query: basisQuestion, answer: planBasis },
  'post /zonings/:zoningId/divisions': { does: 'Zones that a plan asks too much of, divided where their readings say that this saves work', body: divisionQuestion, answer: z.object({ items: z.array(zoneDivision) }) },
  'get /zonings/:zoningId/plans': { does: 'Plans on these zones', answer: listOf(planSummary) },
  'post /zonings/:zoningId/plans': { does: 'Make a sampling plan and draw its vines', body: newPlan, answer: planView, status: 201 },
  'get /zonings/:zoningId/earlier-plans/:planId': { does: 'What a new plan on these zones takes over from an earlier plan of the block', answer: earlierPlan },
  'get /plans': { does: 'Plans, and zones that a plan could be made on', query: ofBlock, answer: planList },
  'post /plans/day': { does: 'Plans of several blocks in the quickest order from gate to gate', body: dayQuestion, answer: dayWalk },
  'get /plans/:planId': { does: 'A plan with its vines', answer: planView },
  'get /plans/:planId/walk': { does: 'The walk past the vines from a gate, shared among people, as lines on the map', query: walkQuestion, answer: planWalk },
  'get /plans/:planId/standing': { does: 'How far each zone is with what was read: enough here, or so many more', answer: z.object({ items: z.array(planStanding) }) },
  'patch /plans/:planId': { does: 'Change a draft plan', body: planChange, answer: planView },
  'post /plans/:planId/lock': { does: 'Keep the vines of a plan as drawn', answer: planView },
  'post /plans/:planId/redraw': { does: 'Draw other vines, with a reason', body: planRedraw, answer: planView },
  'get /plans/:planId/export': { does: 'The vines of a plan as a file', query: planExport, type: '*/*' },
});
