import { spawn } from 'node:child_process';
import { root } from '../checkout.mjs';

const keptTailChars = 4_000;
const running = new Set();

// A command must not outlive the script that waits for it.
process.on('exit', () => running.forEach((child) => child.kill('SIGTERM')));

/** A command that ended with another exit code than 0; the message holds the end of what it printed. */
export class CommandFailed extends Error {
  constructor(command, { code, signal, output }) {
    super(`${command} ended with ${signal ?? `exit code ${code}`}.\n${output.trim().slice(-keptTailChars)}`);
    this.code = code;
    this.output = output;
  }
}

/**
 * Runs a program to its end and resolves to what it wrote on standard output.
 * Options are those of child_process.spawn, plus `input` (text for standard input), `isShown` (output goes straight to
 * the terminal instead of being collected) and `isFinishedAlways` (it goes on when the script ends).
 */
export function runCommand(command, args, { input, isShown = false, isFinishedAlways = false, ...options } = {}) {
  return new Promise((resolve, reject) => {
    const output = isShown ? 'inherit' : 'pipe';
    const child = spawn(command, args, { cwd: root, ...options, stdio: [input === undefined ? 'ignore' : 'pipe', output, output] });
    if (!isFinishedAlways) running.add(child);
    let stdout = '';
    let everything = '';
    child.stdout?.on('data', (chunk) => { stdout += chunk; everything += chunk; });
    child.stderr?.on('data', (chunk) => { everything += chunk; });
    child.once('error', reject);
    child.once('close', (code, signal) => {
      running.delete(child);
      if (code === 0) resolve(stdout);
      else reject(new CommandFailed(command, { code, signal, output: everything }));
    });
    child.stdin?.on('error', () => {}); // A program that ends without reading its input says so by its exit code.
    child.stdin?.end(input);
  });
}

/** True when the program exists and ends with exit code 0. */
export async function commandWorks(command, args, options) {
  try {
    await runCommand(command, args, options);
    return true;
  } catch {
    return false;
  }
}
