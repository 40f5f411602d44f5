import type { Language } from '../../../shared/contracts/common.ts';
import type { PlanView } from '../../../shared/contracts/plans.ts';
import type { Access } from '../../access/access.ts';
import { geoJsonOf } from '../../exporters/features/geoJson.ts';
import { geoPackageOf } from '../../exporters/features/geoPackage.ts';
import { kmlOf } from '../../exporters/features/kml.ts';
import { shapefileOf } from '../../exporters/features/shapefile.ts';
import { fileName } from '../../exporters/fileName.ts';
import { planFeatures } from '../../exporters/planFeatures.ts';
import { planGpx } from '../../exporters/planGpx.ts';
import { planTable } from '../../exporters/planTable.ts';
import { vineMark } from '../../exporters/vineMark.ts';
import { viewPlan } from './viewPlan.ts';

interface PlanFormat {
  type: string;
  extension: string;
  write: (plan: PlanView, language: Language) => string | Buffer | Promise<Buffer>;
}

/** Formats a plan leaves in; another is a row here. */
export const planFormats = {
  csv: { type: 'text/csv; charset=utf-8', extension: 'csv', write: planTable },
  gpx: { type: 'application/gpx+xml; charset=utf-8', extension: 'gpx', write: planGpx },
  geojson: { type: 'application/geo+json', extension: 'geojson', write: (plan) => geoJsonOf(planFeatures(plan)) },
  shapefile: { type: 'application/zip', extension: 'zip', write: (plan, language) => shapefileOf(planFeatures(plan), language) },
  geopackage: { type: 'application/geopackage+sqlite3', extension: 'gpkg', write: (plan) => geoPackageOf([planFeatures(plan)]) },
  kml: { type: 'application/vnd.google-earth.kml+xml', extension: 'kml', write: (plan) => kmlOf(planFeatures(plan), (_, at) => ({ label: `${plan.targets[at]!.walkOrder ?? ''} ${vineMark(plan.targets[at]!)}`.trim(), colour: null })) },
} satisfies Record<string, PlanFormat>;

/** The vines of a plan as a file; a table as a spreadsheet set to `language` opens it. */
export async function exportPlan(access: Access, planId: string, { format, language }: { format: keyof typeof planFormats; language: Language }): Promise<{ name: string; type: string; body: string | Buffer }> {
  const plan = await viewPlan(access, planId);
  const { type, extension, write }: PlanFormat = planFormats[format];
  return { name: fileName([plan.blockName, plan.name], extension), type, body: await write(plan, language) };
}
