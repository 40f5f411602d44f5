import { AnalysisError } from '../../shared/analysis/analysisError.ts';
import { ImportProblem } from '../importers/importProblem.ts';

/** An error about the input as it crosses a thread, which would strip its class and fields. */
export type CarriedError = { kind: 'analysis'; code: string; message: string } | { kind: 'import'; code: ImportProblem['code']; fact: string; remedy: string; params: ImportProblem['params']; file: string | null };

/** The crossing form of an error that people may read, or null for a fault of ours. */
export function toCarried(error: unknown): CarriedError | null {
  if (error instanceof ImportProblem) return { kind: 'import', code: error.code, fact: error.fact, remedy: error.remedy, params: error.params, file: error.file };
  if (error instanceof AnalysisError) return { kind: 'analysis', code: error.code, message: error.message };
  return null;
}

export function fromCarried(carried: CarriedError): Error {
  if (carried.kind === 'analysis') return new AnalysisError(carried.code, carried.message);
  const { kind: _, file, ...parts } = carried;
  return new ImportProblem({ ...parts, ...(file === null ? {} : { file }) });
}
