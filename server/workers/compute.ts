import { workerData, type MessagePort } from 'node:worker_threads';
import { toCarried, type CarriedError } from './carriedError.ts';
import { yieldToRequests } from './yieldToRequests.ts';

type Progress = (stage: string, progress: number) => void;
type Computation = (input: never, progress: Progress) => unknown;

/** One row a computation that runs in a thread; each loads its code when first asked for. */
const computations = {
  labFile: async () => (await import('../importers/lab/readLabFile.ts')).readLabFile,
  compareLayers: async () => (await import('./compareLayers.ts')).compareLayers,
  divideZones: async () => (await import('../ground/divideZones.ts')).divideZones,
  drawVines: async () => (await import('../ground/drawVines.ts')).drawVines,
  describeFile: async () => (await import('../placing/describeFile.ts')).describeFile,
  outlinesOfFile: async () => (await import('../placing/outlinesOfFile.ts')).outlinesOfFile,
  rowsOfFile: async () => (await import('../placing/rowsOfFile.ts')).rowsOfFile,
  placeFile: async () => (await import('../placing/placeFile.ts')).placeFile,
  shareRound: async () => (await import('../ground/shareRound.ts')).shareRound,
  stableGround: async () => (await import('./stableGround.ts')).stableGround,
  suggestLots: async () => (await import('./suggestLots.ts')).suggestLots,
  traceZones: async () => (await import('./traceZones.ts')).traceZones,
  zoning: async () => (await import('../../shared/analysis/zoning.ts')).makeZoning,
} satisfies Record<string, () => Promise<Computation>>;

export type ComputeName = keyof typeof computations;

/** What a thread is started with: the niceness it takes, where its lane lets requests go first. */
export interface LaneData {
  niceness?: number;
}

export type ComputeAnswer = { value: unknown } | { refused: CarriedError };

const { niceness } = (workerData ?? {}) as LaneData;
if (niceness !== undefined) yieldToRequests(niceness);

/** Entry of a compute thread. What is wrong with the input comes back as an answer; a fault of ours is thrown. */
export default async function compute(task: { name: ComputeName; input: never; port: MessagePort }): Promise<ComputeAnswer> {
  const load = (computations as Record<string, () => Promise<Computation>>)[task.name];
  if (!load) throw new Error(`No computation "${String(task.name)}"`);
  const work = await load();
  try {
    return { value: await work(task.input, (stage, progress) => task.port.postMessage({ stage, progress })) };
  } catch (error) {
    const carried = toCarried(error);
    if (carried === null) throw error;
    return { refused: carried };
  }
}
