export interface LoadedProgram {
  readonly exports: Record<string, unknown>;
  keep(): void;
}

export function loadProgram(first: string, keptPath: string): LoadedProgram;
