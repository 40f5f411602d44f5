import { z } from 'zod';
import { id } from './common.ts';

export const jobView = z.object({
  id,
  kind: z.string(),
  subjectType: z.string(),
  subjectId: id.nullable(),
  state: z.enum(['queued', 'running', 'done', 'failed', 'cancelled']),
  stage: z.string(),
  progress: z.number().min(0).max(1),
  problem: z.string().nullable(),
  result: z.unknown(),
  createdAt: z.string(),
  finishedAt: z.string().nullable(),
});
export type JobView = z.infer<typeof jobView>;
