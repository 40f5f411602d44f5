import { zipSync } from 'fflate';

/** A ZIP of the given files, packed unless they are many. */
export function writeZip(files: Readonly<Record<string, Uint8Array | string>>, level: 0 | 6 = 6): Uint8Array {
  return zipSync(Object.fromEntries(Object.entries(files).map(([name, contents]) => [name, typeof contents === 'string' ? new TextEncoder().encode(contents) : contents])), { level });
}

/** Changes the list of contents of a ZIP: `change` gets a view of each entry's 46 fixed bytes. */
export function patchEntries(zip: Uint8Array, change: (view: DataView, index: number) => void): Uint8Array {
  const out = new Uint8Array(zip);
  const view = new DataView(out.buffer);
  const end = out.length - 22;
  let at = view.getUint32(end + 16, true);
  for (let i = 0; i < view.getUint16(end + 10, true); i++) {
    const next = at + 46 + view.getUint16(at + 28, true) + view.getUint16(at + 30, true) + view.getUint16(at + 32, true);
    change(new DataView(out.buffer, at, 46), i);
    at = next;
  }
  return out;
}
