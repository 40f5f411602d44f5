import { describe, expect, it } from 'vitest';
import { withoutRecords } from '../../server/services/photos/pictureBytes.ts';

const segment = (marker: number, content: string) => Buffer.concat([Buffer.from([0xff, marker, 0, content.length + 2]), Buffer.from(content, 'latin1')]);
const start = Buffer.from([0xff, 0xd8]);
const scan = Buffer.concat([segment(0xda, 'scan'), Buffer.from([1, 2, 3, 0xff, 0x00, 9, 0xff, 0xd9])]);
const frame = segment(0xe0, 'JFIF\0');
const tables = segment(0xdb, 'quantisation');
const colours = segment(0xee, 'Adobe');

describe('a photo without what stands beside the picture', () => {
  it('loses place, device and comments, and keeps every byte of the picture', () => {
    const dirty = Buffer.concat([start, frame, segment(0xe1, 'Exif\0\0GPS 43.1 N'), segment(0xe1, 'http://ns.adobe.com/xap'), segment(0xed, 'Photoshop'), segment(0xfe, 'taken by'), colours, tables, scan]);
    expect(withoutRecords(dirty)).toEqual(Buffer.concat([start, frame, colours, tables, scan]));
  });

  it('leaves a clean picture as it is, fill bytes aside', () => {
    const clean = Buffer.concat([start, frame, tables, scan]);
    expect(withoutRecords(clean)).toEqual(clean);
    expect(withoutRecords(Buffer.concat([start, frame, Buffer.from([0xff, 0xff]), tables, scan]))).toEqual(clean);
  });

  it.each([['text', Buffer.from('<html>')], ['nothing', Buffer.alloc(0)], ['a picture cut off', Buffer.concat([start, frame, Buffer.from([0xff, 0xdb, 0x10, 0x00, 1])])]])('refuses %s', (_, bytes) => {
    expect(() => withoutRecords(bytes)).toThrow(/JPEG/);
  });
});
