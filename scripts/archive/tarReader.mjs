// Reads a tar archive from front to back without unpacking it, so that a backup is checked before anything is touched.
// Understands what `tar --format=gnu` writes for plain files: ustar headers, long names ('L' entries) and base-256
// numbers (GNU tar manual, "Basic Tar Format"). Everything else is refused, links and folders too.
import { open } from 'node:fs/promises';
import { Problem } from '../progress.mjs';

const blockBytes = 512;
const chunkBytes = 1 << 20;
const padded = (bytes) => Math.ceil(bytes / blockBytes) * blockBytes;

function text(header, start, length) {
  const field = header.subarray(start, start + length);
  const end = field.indexOf(0);
  return field.subarray(0, end === -1 ? length : end).toString('utf8');
}

/** A number field: octal digits, or base 256 when the first bit is set. */
function number(header, start, length) {
  if ((header[start] & 0x80) === 0) return parseInt(text(header, start, length).trim() || '0', 8);
  return header.subarray(start + 1, start + length).reduce((value, byte) => value * 256 + byte, 0);
}

/** The header's own sum counts its eight bytes as spaces. */
function hasRightSum(header) {
  const sum = header.reduce((total, byte, index) => total + (index >= 148 && index < 156 ? 32 : byte), 0);
  return sum === number(header, 148, 8);
}

/** Yields the content of an entry in chunks. */
async function* contentOf(handle, { position, size, name }) {
  const buffer = Buffer.alloc(Math.min(chunkBytes, Math.max(size, 1)));
  for (let done = 0; done < size;) {
    const { bytesRead } = await handle.read(buffer, 0, Math.min(buffer.length, size - done), position + done);
    if (bytesRead === 0) throw new Problem(`The archive ends in the middle of ${name}. It was cut off; take another copy.`);
    done += bytesRead;
    yield buffer.subarray(0, bytesRead);
  }
}

async function textOf(handle, entry) {
  const chunks = [];
  for await (const chunk of contentOf(handle, entry)) chunks.push(Buffer.from(chunk));
  return Buffer.concat(chunks).toString('utf8').replace(/\0+$/, '');
}

async function readHeader(handle, position) {
  const header = Buffer.alloc(blockBytes);
  const { bytesRead } = await handle.read(header, 0, blockBytes, position);
  if (bytesRead < blockBytes) throw new Problem('The archive has no end mark. It was cut off; take another copy.');
  if (header.every((byte) => byte === 0)) return null;
  if (text(header, 257, 5) !== 'ustar' || !hasRightSum(header)) throw new Problem('The file is not a tar archive, or it is damaged.');
  const prefix = header[262] === 0x20 ? '' : text(header, 345, 155);
  const name = text(header, 0, 100);
  return { name: prefix === '' ? name : `${prefix}/${name}`, size: number(header, 124, 12), type: String.fromCharCode(header[156] || 0x30) };
}

/**
 * Yields { name, size, content } for each file; `content` yields its bytes in chunks that are valid until the next one.
 * Ends at the archive's end mark; throws a Problem at anything else than a whole archive of plain files.
 */
export async function* readTar(file) {
  const handle = await open(file, 'r');
  try {
    let longName = null;
    for (let position = 0; ;) {
      const header = await readHeader(handle, position);
      if (header === null) return;
      const entry = { ...header, name: longName ?? header.name, position: position + blockBytes };
      position = entry.position + padded(entry.size);
      longName = entry.type === 'L' ? await textOf(handle, entry) : null;
      if (entry.type === 'L') continue;
      if (entry.type !== '0') throw new Problem(`The archive holds something other than a plain file: ${entry.name}.`);
      yield { name: entry.name, size: entry.size, content: () => contentOf(handle, entry) };
    }
  } finally {
    await handle.close();
  }
}
