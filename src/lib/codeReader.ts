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
  const { decodeQR } = await import('qr/decode.js');
  const canvas = document.createElement('canvas');
  const paint = canvas.getContext('2d', { willReadFrequently: true })!;
  return (video) => {
    const { videoWidth, videoHeight } = video;
    if (videoWidth === 0 || videoHeight === 0) return Promise.resolve([]);
    const scale = Math.min(1, longestPx / Math.max(videoWidth, videoHeight));
    [canvas.width, canvas.height] = [Math.round(videoWidth * scale), Math.round(videoHeight * scale)];
    paint.drawImage(video, 0, 0, canvas.width, canvas.height);
    return Promise.resolve(codesIn(paint.getImageData(0, 0, canvas.width, canvas.height), decodeQR));
  };
}

/** What a picture says, or nothing: the reader throws where it finds no code, which is most pictures. */
export function codesIn(picture: { width: number; height: number; data: Uint8ClampedArray }, decode: (picture: { width: number; height: number; data: Uint8ClampedArray }) => string): string[] {
  try {
    return [decode(picture)];
  } catch {
    return [];
  }
}
