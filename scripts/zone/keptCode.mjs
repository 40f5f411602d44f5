// Loads a program of CommonJS files with the compiled code that an earlier run kept of them, as other runtimes keep their
// byte code: a run of a second or two spends a tenth of its time on compiling.
// Code is kept by the content of its file, so that none is taken for another's; V8 refuses what another version or setting made.
import { createHash } from 'node:crypto';
import { readFileSync, renameSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import path from 'node:path';
import { constants, Script } from 'node:vm';

const parameters = ['exports', 'require', 'module', '__filename', '__dirname'];

/**
 * In: the first file, and the file that keeps the code. Out: what the first file exports, and `keep`, which writes the code
 * of all that was loaded when some of it was not kept yet. Files name each other by paths that begin with a dot.
 */
export function loadProgram(first, keptPath) {
  const kept = readKept(keptPath);
  const loaded = new Map();
  let isNew = false;
  const load = (file) => {
    const known = loaded.get(file);
    if (known !== undefined) return known.module.exports;
    const source = readFileSync(file, 'utf8');
    const key = hashOf(source);
    const script = new Script(`(function (${parameters.join(', ')}) {${source}\n})`, { filename: file, cachedData: kept.get(key), importModuleDynamically: constants.USE_MAIN_CONTEXT_DEFAULT_LOADER });
    isNew ||= !kept.has(key) || script.cachedDataRejected === true;
    const module = { exports: {} };
    loaded.set(file, { module, script, key });
    const others = createRequire(file);
    const require = (name) => (name.startsWith('.') ? load(path.resolve(path.dirname(file), name)) : others(name));
    script.runInThisContext().call(module.exports, module.exports, require, module, file, path.dirname(file));
    return module.exports;
  };
  return {
    exports: load(first),
    keep() {
      if (!isNew) return;
      isNew = false;
      for (const { script, key } of loaded.values()) kept.set(key, script.createCachedData());
      writeKept(keptPath, kept);
    },
  };
}

const hashOf = (content) => createHash('sha256').update(content).digest('hex');

/** One line of JSON, a hash of the rest and the key and length of each code, then the codes; nothing when there is none or it is damaged, which V8 need not notice. */
function readKept(keptPath) {
  const kept = new Map();
  try {
    const bytes = readFileSync(keptPath);
    const headEnd = bytes.indexOf('\n');
    const { hash, codes } = JSON.parse(bytes.toString('utf8', 0, headEnd));
    if (hashOf(bytes.subarray(headEnd + 1)) !== hash) return kept;
    let at = headEnd + 1;
    for (const [key, length] of codes) {
      kept.set(key, bytes.subarray(at, at + length));
      at += length;
    }
  } catch {
    kept.clear();
  }
  return kept;
}

/** Where it cannot be written the next run compiles again. */
function writeKept(keptPath, kept) {
  const body = Buffer.concat([...kept.values()]);
  const head = JSON.stringify({ hash: hashOf(body), codes: [...kept].map(([key, code]) => [key, code.length]) });
  const draft = `${keptPath}.${process.pid}.part`;
  try {
    writeFileSync(draft, Buffer.concat([Buffer.from(`${head}\n`), body]));
    renameSync(draft, keptPath);
  } catch {
    // A folder that is not ours to write.
  }
}
