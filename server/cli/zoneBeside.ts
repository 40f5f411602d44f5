import type { EdgeCoincidence } from '../../shared/analysis/layerAdviceEdges.ts';
import { compareZoningEdges, type WorkBeside } from '../../shared/analysis/zoning.ts';
import { gapsIn, holdsIn, structuresIn, type EvidenceParts } from '../../shared/analysis/zoningEvidence.ts';

/**
 * The work beside the zones as a list of tasks that two threads take from: the second thread while this one makes zones, this
 * one when it has made them. Every task has random numbers of its own, so who does which changes the time, never the outcome.
 */
export interface BesideTasks {
  readonly work: WorkBeside;
  /** One number in shared memory: how many tasks have been taken. */
  readonly taken: Int32Array;
}

export interface BesideOutcome extends EvidenceParts {
  readonly edges: ReadonlyMap<string, EdgeCoincidence>;
}

export interface BesideDone {
  readonly outcome: Partial<BesideOutcome>;
  readonly seconds: Readonly<Record<string, number>>;
}

/** The longest first: whoever takes the last one then ends soon after the other. */
export const BESIDE_TASKS: readonly { readonly name: string; readonly of: (work: WorkBeside) => Partial<BesideOutcome> }[] = [
  { name: 'gaps', of: ({ evidence }) => ({ gaps: gapsIn(evidence) }) },
  { name: 'layer advice', of: (work) => ({ edges: compareZoningEdges(work) }) },
  { name: 'structures', of: ({ evidence }) => ({ structures: structuresIn(evidence) }) },
  { name: 'holds', of: ({ evidence }) => ({ holds: holdsIn(evidence) }) },
];

/** Does what nobody else has begun. */
export function doBeside({ work, taken }: BesideTasks): BesideDone {
  const seconds: Record<string, number> = {};
  let outcome: Partial<BesideOutcome> = {};
  for (;;) {
    const task = BESIDE_TASKS[Atomics.add(taken, 0, 1)];
    if (task === undefined) return { outcome, seconds };
    const start = performance.now();
    outcome = { ...outcome, ...task.of(work) };
    seconds[task.name] = (performance.now() - start) / 1000;
  }
}
