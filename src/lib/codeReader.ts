import type { CornerSquares, Picture } from './slantedCode.ts';

/** Codes in a picture of the camera. */
export type CodeReader = (video: HTMLVideoElement) => Promise<string[]>;

interface Detector {
  detect: (source: HTMLVideoElement) => Promise<{ rawValue: string }[]>;
}
interface DetectorClass {
  new (options: { formats: string[] }): Detector;
  getSupportedFormats?: () => Promise<readonly string[]>;
}

const wanted = ['qr_code', 'code_128', 'data_matrix'];

/**
 * The browser's own reader of codes (W3C Accelerated Shape Detection) where it reads QR codes: some browsers have the
 * name and read nothing. Elsewhere a reader in plain script, fetched when it is first wanted and kept on the phone with the rest.
 */
export async function codeReader(): Promise<CodeReader> {
  const ofBrowser = (globalThis as { BarcodeDetector?: DetectorClass }).BarcodeDetector;
  const formats = ofBrowser ? await ofBrowser.getSupportedFormats?.().catch(() => []) : [];
  if (!ofBrowser || (formats !== undefined && !formats.includes('qr_code'))) return scriptReader();
  const detector = new ofBrowser({ formats: wanted.filter((format) => formats === undefined || formats.includes(format)) });
  return async (video) => (await detector.detect(video).catch(() => [])).map(({ rawValue }) => rawValue);
}

/** Pixels along the longer side: a label that fills a third of the picture still has six a module, and a look takes a few milliseconds. */
const longestPx = 800;

async function scriptReader(): Promise<CodeReader> {
  const [{ decodeQR }, { straightened }] = await Promise.all([import('qr/decode.js'), import('./slantedCode.ts')]);
  const canvas = document.createElement('canvas');
  const paint = canvas.getContext('2d', { willReadFrequently: true })!;
  return (video) => {
    const { videoWidth, videoHeight } = video;
    if (videoWidth === 0 || videoHeight === 0) return Promise.resolve([]);
    const scale = Math.min(1, longestPx / Math.max(videoWidth, videoHeight));
    [canvas.width, canvas.height] = [Math.round(videoWidth * scale), Math.round(videoHeight * scale)];
    paint.drawImage(video, 0, 0, canvas.width, canvas.height);
    return Promise.resolve(codesIn(paint.getImageData(0, 0, canvas.width, canvas.height), { decodeQR, straightened }));
  };
}

interface ScriptParts {
  readonly decodeQR: (picture: Picture, options?: { pointsOnDetect?: (corners: CornerSquares) => void }) => string;
  readonly straightened: (picture: Picture, corners: CornerSquares) => Picture | null;
}

/**
 * What a picture says, or nothing: the reader throws where it finds no code, which is most pictures. Where it saw the
 * corners of a code and could not read it, the phone was held at a slant: then once more, looked at from straight above.
 */
export function codesIn(picture: Picture, { decodeQR, straightened }: ScriptParts): string[] {
  let corners: CornerSquares | null = null;
  const read = (seen: Picture, options?: { pointsOnDetect: (found: CornerSquares) => void }) => {
    try {
      return [decodeQR(seen, options)];
    } catch {
      return [];
    }
  };
  const found = read(picture, { pointsOnDetect: (seen) => (corners = seen) });
  const straight = found.length === 0 && corners !== null ? straightened(picture, corners) : null;
  return straight === null ? found : read(straight);
}
