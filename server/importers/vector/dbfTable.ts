import { codePage } from './codePages.ts';

/** Attribute table of a shapefile: one object per record, in the order of the shapes. */
export interface DbfTable {
  fields: readonly { name: string; type: string }[];
  rows: readonly Record<string, string | number | boolean | null>[];
  /** How the letters were read; null when it had to be guessed. */
  encoding: string | null;
  /** Rows the header promises and the file does not hold. */
  missingRows: number;
}

/** Reads dBASE III–VII tables as shapefiles carry them (ESRI Shapefile Technical Description 1998; dBASE header layout). */
export function readDbf(bytes: Uint8Array, cpg: string | null): DbfTable {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const promised = view.getUint32(4, true);
  const headerBytes = view.getUint16(8, true);
  const rowBytes = view.getUint16(10, true);
  if (headerBytes < 33 || rowBytes < 2 || headerBytes > bytes.length) throw new RangeError('its header is damaged');
  const { decode, encoding } = letters(bytes, { cpg, driver: bytes[29]!, headerBytes });
  const columns = readColumns(bytes, { headerBytes, rowBytes, decode });
  const held = Math.min(promised, Math.floor((bytes.length - headerBytes + 1) / rowBytes));
  const rows = Array.from({ length: held }, (_, row) => {
    const start = headerBytes + row * rowBytes;
    return Object.fromEntries(columns.map((column) => [column.name, value(column.type, bytes.subarray(start + column.at, start + column.at + column.bytes), decode)]));
  });
  return { fields: columns.map(({ name, type }) => ({ name, type })), rows, encoding, missingRows: promised - held };
}

interface Column {
  name: string;
  type: string;
  at: number;
  bytes: number;
}

type Decode = (bytes: Uint8Array) => string;

function readColumns(bytes: Uint8Array, { headerBytes, rowBytes, decode }: { headerBytes: number; rowBytes: number; decode: Decode }): Column[] {
  const columns: Column[] = [];
  const used = new Set<string>();
  let at = 1;
  for (let field = 32; field + 32 <= headerBytes && bytes[field] !== 0x0d; field += 32) {
    const raw = bytes.subarray(field, field + 11);
    const end = raw.indexOf(0);
    const plain = decode(end < 0 ? raw : raw.subarray(0, end)).trim() || `field ${columns.length + 1}`;
    const width = bytes[field + 16]!;
    if (at + width > rowBytes) break;
    // Two columns of the same name would hide each other.
    const name = used.has(plain) ? `${plain} (${columns.length + 1})` : plain;
    used.add(name);
    columns.push({ name, type: String.fromCharCode(bytes[field + 11]!), at, bytes: width });
    at += width;
  }
  return columns;
}

function value(type: string, bytes: Uint8Array, decode: Decode): string | number | boolean | null {
  const text = decode(bytes).replaceAll('\0', '').trim();
  if (text === '' || /^\*+$/.test(text)) return null;
  if (type === 'N' || type === 'F' || type === 'O' || type === 'I') {
    const number = Number(text.replace(',', '.'));
    return Number.isFinite(number) ? number : null;
  }
  if (type === 'D') return /^\d{8}$/.test(text) && text !== '00000000' ? `${text.slice(0, 4)}-${text.slice(4, 6)}-${text.slice(6)}` : null;
  if (type === 'L') return /^[yYtT]$/.test(text) ? true : /^[nNfF]$/.test(text) ? false : null;
  return text;
}

/** By the .cpg file, else by the table's own code, else UTF-8 if every byte fits, else windows-1252 as a guess. */
function letters(bytes: Uint8Array, { cpg, driver, headerBytes }: { cpg: string | null; driver: number; headerBytes: number }): { decode: Decode; encoding: string | null } {
  const named = codePage(cpg, driver);
  if (named !== null) return { decode: named.decode, encoding: named.name };
  try {
    new TextDecoder('utf-8', { fatal: true }).decode(bytes.subarray(headerBytes));
    const decoder = new TextDecoder('utf-8');
    return { decode: (part) => decoder.decode(part), encoding: 'UTF-8' };
  } catch {
    const decoder = new TextDecoder('windows-1252');
    return { decode: (part) => decoder.decode(part), encoding: null };
  }
}
