// Where things lie in this checkout. Everything a run leaves behind is under .patchrow, which git ignores.
import { mkdirSync } from 'node:fs';
import path from 'node:path';
import { fileURLToPath } from 'node:url';

/** Absolute path of the checkout. */
export const root = path.resolve(fileURLToPath(new URL('..', import.meta.url)));

/** Absolute path of a file or folder of the checkout. */
export const inCheckout = (...parts) => path.join(root, ...parts);

/** Absolute path inside .patchrow; the folder is made when missing. Others may pass through it, secrets in it are mode 600. */
export function inState(...parts) {
  mkdirSync(inCheckout('.patchrow'), { recursive: true, mode: 0o755 });
  return inCheckout('.patchrow', ...parts);
}

/** The folder of uploaded files, the same default as the server's. */
export const filesFolder = () => path.resolve(root, process.env.PATCHROW_DATA || path.join('.patchrow', 'files'));

/** Program installed by npm in this checkout. */
export const npmProgram = (name) => inCheckout('node_modules', '.bin', name);
