import type { EdgeCoincidence } from '../../shared/analysis/layerAdviceEdges.ts';
import { compareZoningEdges, type WorkBeside } from '../../shared/analysis/zoning.ts';
import { weighEvidence, type ZoningEvidence } from '../../shared/analysis/zoningEvidence.ts';

/**
 * The work beside the zones as a list of tasks that two threads take from: the second thread while this one makes zones, this
 * one when it has made them. Every task has random numbers of its own, so who does which changes the time, never the outcome.
 */
export interface BesideTasks {
  readonly work: WorkBeside;
  /** One number in shared memory: how many tasks have been taken. */
  readonly taken: Int32Array;
}

export interface BesideDone {
  readonly evidence: ZoningEvidence | null;
  readonly edges: ReadonlyMap<string, EdgeCoincidence> | null;
  readonly seconds: Readonly<Record<string, number>>;
}

/** Does what nobody else has begun; the longer task comes first. */
export function doBeside({ work, taken }: BesideTasks): BesideDone {
  let evidence: BesideDone['evidence'] = null;
  let edges: BesideDone['edges'] = null;
  const seconds: Record<string, number> = {};
  for (;;) {
    const task = Atomics.add(taken, 0, 1);
    const start = performance.now();
    if (task === 0) evidence = weighEvidence(work.evidence);
    else if (task === 1) edges = compareZoningEdges(work);
    else return { evidence, edges, seconds };
    seconds[task === 0 ? 'evidence' : 'layer advice'] = (performance.now() - start) / 1000;
  }
}
