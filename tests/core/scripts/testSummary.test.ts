import { expect, test } from 'vitest';
import { closingLines, countRun } from '../../../scripts/testSummary.mjs';

const report = (passed: number, failed: number, files: { status: string; assertionResults: { status: string }[] }[] = []) =>
  ({ numPassedTests: passed, numFailedTests: failed, numPendingTests: 2, numTodoTests: 1, testResults: files });

test('a clean run counts its passed and skipped tests', () => {
  expect(countRun({ report: report(7, 0), vitestFailed: false, failedChecks: [] })).toEqual({ passed: 7, failed: 0, skipped: 3 });
});

test('a file that could not be loaded is a failure, one whose test failed is counted once', () => {
  const files = [
    { status: 'failed', assertionResults: [] },
    { status: 'failed', assertionResults: [{ status: 'passed' }, { status: 'failed' }] },
    { status: 'passed', assertionResults: [{ status: 'passed' }] },
  ];
  expect(countRun({ report: report(2, 1, files), vitestFailed: true, failedChecks: [] }).failed).toBe(2);
});

test('an error outside every test and a missing report cannot look like a pass', () => {
  expect(countRun({ report: report(5, 0), vitestFailed: true, failedChecks: [] }).failed).toBe(1);
  expect(countRun({ report: null, vitestFailed: true, failedChecks: [] })).toEqual({ passed: 0, failed: 1, skipped: 0 });
});

test('a failed type check or lint counts as a failure beside the tests', () => {
  expect(countRun({ report: report(5, 1), vitestFailed: true, failedChecks: ['types', 'lint'] }).failed).toBe(3);
});

test('the last line names passed and failed tests and nothing else', () => {
  const lines = closingLines({ counts: { passed: 5, failed: 1, skipped: 2 }, failedChecks: ['lint'], seconds: 61.4 });
  expect(lines).toEqual(['Took 61 s.', '2 skipped.', 'Failed check: lint.', '5 passed, 1 failed']);
});
