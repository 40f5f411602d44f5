/** A multipolygon as a GeoPackage keeps it (OGC 12-128r17, 2.1.3): header with envelope, then well-known binary, little-endian. */
export function geometryBlob(polygons: readonly (readonly (readonly (readonly number[])[])[])[], srsId: number): Uint8Array {
  const points = polygons.flat(2);
  const [x, y] = [points.map((point) => point[0]!), points.map((point) => point[1]!)];
  const headerBytes = 8 + 32;
  const bytes = headerBytes + 9 + polygons.reduce((sum, rings) => sum + 9 + rings.reduce((all, ring) => all + 4 + 16 * ring.length, 0), 0);
  const blob = Buffer.alloc(bytes);
  let at = blob.write('GP', 0, 'latin1');
  at = blob.writeUInt8(0, at);
  // Bit 0: little-endian; bits 1 to 3: an envelope of x and y.
  at = blob.writeUInt8(0b0000_0011, at);
  at = blob.writeInt32LE(srsId, at);
  for (const edge of [Math.min(...x), Math.max(...x), Math.min(...y), Math.max(...y)]) at = blob.writeDoubleLE(edge, at);
  const head = (type: number, count: number) => {
    at = blob.writeUInt8(1, at);
    at = blob.writeUInt32LE(type, at);
    at = blob.writeUInt32LE(count, at);
  };
  head(6, polygons.length);
  for (const rings of polygons) {
    head(3, rings.length);
    for (const ring of rings) {
      at = blob.writeUInt32LE(ring.length, at);
      for (const point of ring) at = blob.writeDoubleLE(point[1]!, blob.writeDoubleLE(point[0]!, at));
    }
  }
  return blob;
}
