import { Router } from 'express';
import { z } from 'zod';
import { newPlan, planChange, planRedraw, basisQuestion } from '../../shared/contracts/planChoices.ts';
import { divisionQuestion } from '../../shared/contracts/plans.ts';
import { dayQuestion, walkQuestion } from '../../shared/contracts/planWalks.ts';
import { ofBlock } from '../../shared/contracts/queries.ts';
import { accessOf, allow, idParam } from '../access/guard.ts';
import { dayOfPlans } from '../services/plans/dayOfPlans.ts';
import { divisionsOf } from '../services/plans/divisions.ts';
import { earlierPlanOn } from '../services/plans/earlierPlan.ts';
import { exportPlan, planFormats } from '../services/plans/exportPlan.ts';
import { planBasisOf } from '../services/plans/planBasis.ts';
import { listPlans, plannableZonings, viewPlan } from '../services/plans/viewPlan.ts';
import { standingOfPlan } from '../services/plans/standingOfPlan.ts';
import { walkOfPlan } from '../services/plans/walkOfPlan.ts';
import { changePlan, lockPlan, makePlan, redrawPlan } from '../services/plans/writePlan.ts';
import { languageOf } from './language.ts';

/** A plan's file in one of its formats. */
export const planExport = z.object({ format: z.enum(Object.keys(planFormats) as [keyof typeof planFormats]) });

/** Sampling plans: how many vines, which, and what walk. */
export function planRoutes(): Router {
  const router = Router({ mergeParams: true });
  const read = allow('plans.margins', 'propose');

  router.get('/zonings/:zoningId/plan-basis', read, async (request, response) => {
    response.json(await planBasisOf(accessOf(request), idParam(request, 'zoningId'), basisQuestion.parse(request.query)));
  });
  router.post('/zonings/:zoningId/divisions', read, async (request, response) => {
    response.json({ items: await divisionsOf(accessOf(request), idParam(request, 'zoningId'), divisionQuestion.parse(request.body).choices) });
  });
  router.get('/zonings/:zoningId/plans', read, async (request, response) => {
    const items = await listPlans(accessOf(request), { zoningId: idParam(request, 'zoningId') });
    response.json({ items, total: items.length });
  });
  router.post('/zonings/:zoningId/plans', allow('plans.draw'), async (request, response) => {
    response.status(201).json(await makePlan(accessOf(request), idParam(request, 'zoningId'), newPlan.parse(request.body)));
  });
  router.get('/zonings/:zoningId/earlier-plans/:planId', read, async (request, response) => {
    response.json(await earlierPlanOn(accessOf(request), idParam(request, 'zoningId'), idParam(request, 'planId')));
  });
  router.get('/plans', read, async (request, response) => {
    const { block } = ofBlock.parse(request.query);
    const items = await listPlans(accessOf(request), block ? { blockId: block } : {});
    response.json({ items, total: items.length, ...(await plannableZonings(accessOf(request))) });
  });
  router.post('/plans/day', read, async (request, response) => {
    response.json(await dayOfPlans(accessOf(request), dayQuestion.parse(request.body)));
  });
  router.get('/plans/:planId', read, async (request, response) => {
    response.json(await viewPlan(accessOf(request), idParam(request, 'planId')));
  });
  router.get('/plans/:planId/walk', read, async (request, response) => {
    response.json(await walkOfPlan(accessOf(request), idParam(request, 'planId'), walkQuestion.parse(request.query)));
  });
  router.get('/plans/:planId/standing', read, async (request, response) => {
    response.json({ items: await standingOfPlan(accessOf(request), idParam(request, 'planId')) });
  });
  router.patch('/plans/:planId', allow('plans.draw'), async (request, response) => {
    response.json(await changePlan(accessOf(request), idParam(request, 'planId'), planChange.parse(request.body)));
  });
  router.post('/plans/:planId/lock', allow('plans.draw'), async (request, response) => {
    response.json(await lockPlan(accessOf(request), idParam(request, 'planId'), new Date()));
  });
  router.post('/plans/:planId/redraw', allow('plans.draw'), async (request, response) => {
    response.json(await redrawPlan(accessOf(request), idParam(request, 'planId'), planRedraw.parse(request.body), new Date()));
  });
  router.get('/plans/:planId/export', read, async (request, response) => {
    const { format } = planExport.parse(request.query);
    const file = await exportPlan(accessOf(request), idParam(request, 'planId'), { format, language: languageOf(request) });
    // What a name ends in is no kind that every server knows: the format's own comes last.
    response.attachment(file.name).set('content-type', file.type).send(file.body);
  });
  return router;
}
