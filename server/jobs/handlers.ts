import type { Job } from '../models/Job.ts';
import { placeLayerJob } from '../services/imports/placeLayer.ts';
import { zoningJob } from '../services/zonings/runZoning.ts';
import type { JobContext } from './runner.ts';

export interface JobHandler {
  /** Does the work and stores its outcome in one transaction; the returned value is kept with the job. */
  work: (context: JobContext) => Promise<unknown>;
  /** Marks the subject when the job failed for good. */
  failed?: (job: Job, problem: string) => Promise<void>;
}

/** One row a kind of job. */
export const handlers: Record<string, JobHandler> = {
  placeLayer: placeLayerJob,
  zoning: zoningJob,
};
