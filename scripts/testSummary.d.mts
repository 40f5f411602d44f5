export interface RunCounts { passed: number; failed: number; skipped: number }
export interface VitestReport {
  numPassedTests: number;
  numFailedTests: number;
  numPendingTests: number;
  numTodoTests: number;
  testResults: { status: string; assertionResults: { status: string }[] }[];
}
export function countRun(run: { report: VitestReport | null; vitestFailed: boolean; failedChecks: string[] }): RunCounts;
export function closingLines(run: { counts: RunCounts; failedChecks: string[]; seconds: number }): string[];
