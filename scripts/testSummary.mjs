// What a test run comes to, from the JSON report of vitest and the checks beside it.

/**
 * Counts of a run. `report` is vitest's JSON report, or null when it wrote none; `vitestFailed` whether vitest ended with an
 * error; `failedChecks` names the checks beside the tests (types, lint) that failed.
 * A file that could not be loaded and a failed check count as one failure each, as does an error outside every test.
 */
export function countRun({ report, vitestFailed, failedChecks }) {
  const unloaded = (report?.testResults ?? []).filter(({ status, assertionResults }) => status === 'failed' && assertionResults.every(({ status: result }) => result !== 'failed'));
  const passed = report?.numPassedTests ?? 0;
  const skipped = (report?.numPendingTests ?? 0) + (report?.numTodoTests ?? 0);
  let failed = (report?.numFailedTests ?? 0) + unloaded.length;
  if (vitestFailed && failed === 0) failed = 1;
  failed += failedChecks.length;
  return { passed, failed, skipped };
}

/** Lines that close a run; the last one is always `N passed, N failed`. */
export function closingLines({ counts, failedChecks, seconds }) {
  return [
    `Took ${Math.round(seconds)} s.`,
    ...(counts.skipped > 0 ? [`${counts.skipped} skipped.`] : []),
    ...failedChecks.map((name) => `Failed check: ${name}.`),
    `${counts.passed} passed, ${counts.failed} failed`,
  ];
}
