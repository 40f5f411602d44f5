import { mkdirSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { loadProgram } from '../../scripts/zone/keptCode.mjs';

/** A program is loaded with the code that an earlier run kept, and never with another's. */

let folder = '';
const at = (name: string) => join(folder, name);
const load = () => loadProgram(at('first.cjs'), at('kept.code'));
const answer = () => (load().exports.answer as () => unknown)();

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'kept-code-'));
  writeFileSync(at('first.cjs'), "const { sep } = require('node:path'); const { two } = require('./parts/second.cjs'); exports.answer = function answer() { return [sep, two()]; };");
  mkdirSync(at('parts'));
  writeFileSync(at('parts/second.cjs'), "exports.two = () => require('../first.cjs').answer.name + __filename.slice(-10);");
});

afterEach(() => rmSync(folder, { recursive: true, force: true }));

describe('a program of several files', () => {
  it('finds its own files, those of the runtime, and itself while it is being loaded', () => {
    expect(answer()).toEqual(['/', 'answersecond.cjs']);
  });

  it('keeps the code of all that was loaded, once', () => {
    load().keep();
    const { size, mtimeMs } = statSync(at('kept.code'));
    expect(size).toBeGreaterThan(500);
    load().keep();
    expect(statSync(at('kept.code')).mtimeMs).toBe(mtimeMs);
    expect(answer()).toEqual(['/', 'answersecond.cjs']);
  });

  it('takes no kept code for a file that changed, however alike', () => {
    load().keep();
    writeFileSync(at('first.cjs'), readFileSync(at('first.cjs'), 'utf8').replace('[sep, two()]', '[two(), sep]'));
    expect(answer()).toEqual(['answersecond.cjs', '/']);
  });

  it.each(['', 'nonsense', '[["abc",99999999]]\nshort', '{"a":1}\n'])('compiles again when what was kept is damaged: %j', (damaged) => {
    writeFileSync(at('kept.code'), damaged);
    expect(answer()).toEqual(['/', 'answersecond.cjs']);
    load().keep();
    expect(statSync(at('kept.code')).size).toBeGreaterThan(500);
  });

  it('compiles again when the code of a file is damaged, and keeps it anew', () => {
    load().keep();
    const whole = readFileSync(at('kept.code'));
    const damaged = Buffer.from(whole);
    damaged.fill(7, damaged.length - 40);
    writeFileSync(at('kept.code'), damaged);
    expect(answer()).toEqual(['/', 'answersecond.cjs']);
    load().keep();
    expect(readFileSync(at('kept.code')).equals(damaged)).toBe(false);
  });

  it('runs where nothing can be kept', () => {
    const { exports, keep } = loadProgram(at('first.cjs'), join(at('first.cjs'), 'kept.code'));
    keep();
    expect((exports.answer as () => unknown)()).toEqual(['/', 'answersecond.cjs']);
  });
});
