import type { MessagePort } from 'node:worker_threads';

type Progress = (stage: string, progress: number) => void;
type Computation = (input: never, progress: Progress) => unknown;

/** One row a computation that runs in a thread; each loads its code when first asked for. */
const computations = {
  shareRound: async () => (await import('../ground/shareRound.ts')).shareRound,
} satisfies Record<string, () => Promise<Computation>>;

export type ComputeName = keyof typeof computations;

/** Entry of a compute thread. */
export default async function compute(task: { name: ComputeName; input: never; port: MessagePort }): Promise<unknown> {
  const load = (computations as Record<string, () => Promise<Computation>>)[task.name];
  if (!load) throw new Error(`No computation "${String(task.name)}"`);
  const work = await load();
  return work(task.input, (stage, progress) => task.port.postMessage({ stage, progress }));
}
