import { describe, expect, it } from 'vitest';
import { understandFile, type Understood } from '../../../server/importers/formats.ts';
import { ImportProblem } from '../../../server/importers/importProblem.ts';
import { estateLonLat, type CorpusCase } from './corpus.ts';
import { databaseCases } from './corpusDatabases.ts';
import { pointCases } from './corpusPoints.ts';
import { rasterCases } from './corpusRasters.ts';
import { referenceCases } from './corpusReferences.ts';
import { vectorCases } from './corpusVectors.ts';

/** Every file ends as its row says, within this much computing; a busy machine may take longer by the clock. */
const LIMIT_CPU_MS = 10_000;
const TEST_MS = 60_000;

async function outcomeOf({ bytes, fileName, options }: CorpusCase): Promise<Understood | ImportProblem> {
  const file = bytes();
  const start = process.cpuUsage();
  try {
    return await understandFile(file, { fileName, estateLonLat, ...options });
  } catch (error) {
    if (error instanceof ImportProblem) return error;
    throw error;
  } finally {
    const { user, system } = process.cpuUsage(start);
    expect((user + system) / 1000).toBeLessThan(LIMIT_CPU_MS);
  }
}

async function check(each: CorpusCase): Promise<void> {
  const { outcome } = each;
  const found = await outcomeOf(each);
  if (outcome.kind === 'refused') {
    expect(found, 'it was accepted').toBeInstanceOf(ImportProblem);
    const problem = found as ImportProblem;
    expect(problem.message).toMatch(outcome.says);
    expect(problem.code).toBe(outcome.code);
    expect(problem.file).toBe(each.fileName);
    expect(problem.message).toMatch(/\.$/);
    expect(problem.remedy).not.toBe('');
    return;
  }
  if (found instanceof ImportProblem) throw new Error(`refused: ${found.message}`, { cause: found });
  const questions = found.questions.map(({ code }) => code);
  const warnings = found.warnings.map(({ code }) => code);
  if (outcome.kind === 'question') {
    expect(questions).toContain(outcome.question);
    const choices = found.questions.find(({ code }) => code === outcome.question)!.choices.map(({ value }) => value);
    expect(choices).toEqual(expect.arrayContaining([...(outcome.choices ?? [])]));
    return;
  }
  expect(questions).toEqual([]);
  expect([...new Set(warnings)].sort()).toEqual([...(outcome.warnings ?? [])].sort());
}

describe('rasters of every kind and damage', () => {
  it.each(rasterCases.map((each) => [each.title, each] as const))('%s', (_, each) => check(each), TEST_MS);
});

describe('places and reference systems of every kind', () => {
  it.each(referenceCases.map((each) => [each.title, each] as const))('%s', (_, each) => check(each), TEST_MS);
});

describe('outlines, soil maps and archives of every kind and damage', () => {
  it.each(vectorCases.map((each) => [each.title, each] as const))('%s', (_, each) => check(each), TEST_MS);
});

describe('databases of every kind and damage', () => {
  it.each(databaseCases.map((each) => [each.title, each] as const))('%s', (_, each) => check(each), TEST_MS);
});

describe('tables of points of every kind and damage', () => {
  it.each(pointCases.map((each) => [each.title, each] as const))('%s', (_, each) => check(each), TEST_MS);
});

it('the corpus has at least 150 files', () => {
  expect(rasterCases.length + referenceCases.length + vectorCases.length + databaseCases.length + pointCases.length).toBeGreaterThanOrEqual(150);
});
