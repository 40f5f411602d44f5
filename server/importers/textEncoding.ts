import { ImportProblem } from './importProblem.ts';
import { limits } from './limits.ts';

export interface DecodedText {
  text: string;
  /** As a person would name it. */
  encoding: 'UTF-8' | 'UTF-16' | 'Western European (windows-1252)';
}

/** Text of a file by its byte-order mark, else UTF-8 if it reads as such, UTF-16 if every other byte is 0, else windows-1252. */
export function decodeText(bytes: Uint8Array): DecodedText {
  if (bytes.length > limits.textBytes) {
    throw new ImportProblem({ code: 'too-large', fact: `It holds ${Math.round(bytes.length / 2 ** 20)} MB of text; ${limits.textBytes / 2 ** 20} MB is the most.`, remedy: 'Split it, or thin out its points.' });
  }
  const [first, second] = bytes;
  if (first === 0xff && second === 0xfe) return { text: new TextDecoder('utf-16le').decode(bytes), encoding: 'UTF-16' };
  if (first === 0xfe && second === 0xff) return { text: new TextDecoder('utf-16be').decode(bytes), encoding: 'UTF-16' };
  const wide = wideKind(bytes);
  if (wide !== null) return { text: new TextDecoder(wide).decode(bytes), encoding: 'UTF-16' };
  try {
    return { text: new TextDecoder('utf-8', { fatal: true }).decode(bytes), encoding: 'UTF-8' };
  } catch {
    return { text: new TextDecoder('windows-1252').decode(bytes), encoding: 'Western European (windows-1252)' };
  }
}

/** UTF-16 without a mark: in plain text nearly every second byte is 0. */
function wideKind(bytes: Uint8Array): 'utf-16le' | 'utf-16be' | null {
  const head = bytes.subarray(0, Math.min(bytes.length, 2000) & ~1);
  if (head.length < 4) return null;
  let even = 0;
  let odd = 0;
  for (let i = 0; i < head.length; i += 2) {
    if (head[i] === 0) even++;
    if (head[i + 1] === 0) odd++;
  }
  const pairs = head.length / 2;
  if (odd > 0.7 * pairs && even < 0.1 * pairs) return 'utf-16le';
  return even > 0.7 * pairs && odd < 0.1 * pairs ? 'utf-16be' : null;
}
