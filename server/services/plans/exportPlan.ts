import type { PlanView } from '../../../shared/contracts/plans.ts';
import type { Access } from '../../access/access.ts';
import { planGpx } from '../../exporters/planGpx.ts';
import { planTable } from '../../exporters/planTable.ts';
import { viewPlan } from './viewPlan.ts';

/** Formats a plan leaves in; another is a row here. */
const formats = {
  csv: { type: 'text/csv; charset=utf-8', write: planTable },
  gpx: { type: 'application/gpx+xml; charset=utf-8', write: planGpx },
} satisfies Record<string, { type: string; write: (plan: PlanView) => string }>;

/** The vines of a plan as a file. */
export async function exportPlan(access: Access, planId: string, format: keyof typeof formats): Promise<{ name: string; type: string; body: string }> {
  const plan = await viewPlan(access, planId);
  const { type, write } = formats[format];
  return { name: `${plan.blockName} ${plan.name}.${format}`.replace(/[\\/:*?"<>|]+/g, '-'), type, body: write(plan) };
}
