/** A shapefile made by hand (ESRI Shapefile Technical Description, July 1998; dBASE III table). */

export interface ShapefilePlan {
  /** 1 points, 3 lines, 5 polygons; +10 with heights. */
  kind?: number;
  /** Parts of each record as rings or lines of positions; null for an empty shape. */
  records: readonly (readonly (readonly (readonly number[])[])[] | null)[];
  fields?: readonly { name: string; type: 'C' | 'N' | 'D' | 'L'; width: number }[];
  rows?: readonly (readonly string[])[];
  /** Bytes of a letter beyond ASCII. */
  encode?: (text: string) => Uint8Array;
}

export interface ShapefileParts {
  shp: Uint8Array;
  shx: Uint8Array;
  dbf: Uint8Array;
}

export function writeShapefile({ kind = 5, records, fields = [{ name: 'NAME', type: 'C', width: 20 }], rows, encode = (text) => new TextEncoder().encode(text) }: ShapefilePlan): ShapefileParts {
  const bodies = records.map((parts) => recordBody(kind, parts));
  const shp = new Uint8Array(100 + bodies.reduce((sum, body) => sum + 8 + body.length, 0));
  const shx = new Uint8Array(100 + bodies.length * 8);
  for (const bytes of [shp, shx]) {
    const view = new DataView(bytes.buffer);
    view.setInt32(0, 9994);
    view.setInt32(24, bytes.length / 2);
    view.setInt32(28, 1000, true);
    view.setInt32(32, kind, true);
  }
  let at = 100;
  bodies.forEach((body, i) => {
    const view = new DataView(shp.buffer);
    view.setInt32(at, i + 1);
    view.setInt32(at + 4, body.length / 2);
    shp.set(body, at + 8);
    new DataView(shx.buffer).setInt32(100 + i * 8, at / 2);
    new DataView(shx.buffer).setInt32(104 + i * 8, body.length / 2);
    at += 8 + body.length;
  });
  return { shp, shx, dbf: writeDbf(fields, rows ?? records.map((_, i) => [`shape ${i + 1}`]), encode) };
}

function recordBody(kind: number, parts: readonly (readonly (readonly number[])[])[] | null): Uint8Array {
  if (parts === null) return new Uint8Array(4);
  const points = parts.flat();
  const heights = kind > 10 ? 8 : 0;
  if (kind % 10 === 1) {
    const view = new DataView(new ArrayBuffer(20 + heights * 2));
    view.setInt32(0, kind, true);
    points[0]!.slice(0, 2).forEach((number, i) => view.setFloat64(4 + i * 8, number, true));
    return new Uint8Array(view.buffer);
  }
  const pointsAt = 44 + parts.length * 4;
  const view = new DataView(new ArrayBuffer(pointsAt + points.length * 16 + (heights === 0 ? 0 : 2 * (16 + points.length * 8))));
  view.setInt32(0, kind, true);
  const bounds = [Math.min(...points.map(([x]) => x!)), Math.min(...points.map(([, y]) => y!)), Math.max(...points.map(([x]) => x!)), Math.max(...points.map(([, y]) => y!))];
  bounds.forEach((number, i) => view.setFloat64(4 + i * 8, number, true));
  view.setInt32(36, parts.length, true);
  view.setInt32(40, points.length, true);
  let start = 0;
  parts.forEach((part, i) => {
    view.setInt32(44 + i * 4, start, true);
    start += part.length;
  });
  points.forEach(([x, y], i) => {
    view.setFloat64(pointsAt + i * 16, x!, true);
    view.setFloat64(pointsAt + i * 16 + 8, y!, true);
  });
  return new Uint8Array(view.buffer);
}

function writeDbf(fields: NonNullable<ShapefilePlan['fields']>, rows: readonly (readonly string[])[], encode: (text: string) => Uint8Array): Uint8Array {
  const headerBytes = 33 + fields.length * 32;
  const rowBytes = 1 + fields.reduce((sum, { width }) => sum + width, 0);
  const out = new Uint8Array(headerBytes + rows.length * rowBytes + 1).fill(0x20, headerBytes);
  const view = new DataView(out.buffer);
  out[0] = 3;
  view.setUint32(4, rows.length, true);
  view.setUint16(8, headerBytes, true);
  view.setUint16(10, rowBytes, true);
  fields.forEach(({ name, type, width }, i) => {
    out.set(encode(name).subarray(0, 10), 32 + i * 32);
    out[32 + i * 32 + 11] = type.charCodeAt(0);
    out[32 + i * 32 + 16] = width;
  });
  out[headerBytes - 1] = 0x0d;
  rows.forEach((row, r) => {
    let at = headerBytes + r * rowBytes + 1;
    fields.forEach(({ width }, f) => {
      out.set(encode(row[f] ?? '').subarray(0, width), at);
      at += width;
    });
  });
  out[out.length - 1] = 0x1a;
  return out;
}
