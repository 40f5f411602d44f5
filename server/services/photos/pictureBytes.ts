import { Unusable } from '../../errors.ts';
import { say } from '../../sentences/say.ts';

const startOfImage = 0xd8;
const startOfScan = 0xda;
const firstApplication = 0xe1;
const lastApplication = 0xef;
const adobe = 0xee;
const comment = 0xfe;

/**
 * A JPEG without what stands beside the picture: Exif and XMP (place, device, owner), Photoshop records and comments.
 * The segments APP1 … APP15 and COM go (ITU-T T.81, annex B), save APP14, which tells how colours are coded, and the
 * frame of JFIF (APP0). The picture itself is not touched.
 */
export function withoutRecords(bytes: Buffer): Buffer {
  if (bytes.length < 4 || bytes[0] !== 0xff || bytes[1] !== startOfImage) throw new Unusable('noPhoto', say('noJpeg'));
  const kept: Buffer[] = [bytes.subarray(0, 2)];
  let at = 2;
  while (at + 4 <= bytes.length) {
    if (bytes[at] !== 0xff) throw damaged();
    const marker = bytes[at + 1]!;
    if (marker === 0xff) {
      at++;
      continue;
    }
    if (marker === startOfScan) return Buffer.concat([...kept, bytes.subarray(at)]);
    const end = at + 2 + bytes.readUInt16BE(at + 2);
    if (end > bytes.length) throw damaged();
    const isRecord = (marker >= firstApplication && marker <= lastApplication && marker !== adobe) || marker === comment;
    if (!isRecord) kept.push(bytes.subarray(at, end));
    at = end;
  }
  throw damaged();
}

const damaged = () => new Unusable('noPhoto', say('damagedJpeg'));
