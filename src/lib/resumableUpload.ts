import type { DetailedError, Upload } from 'tus-js-client';
import { currentCsrfToken } from './http.ts';
import { offlineProblem, problemFrom, type HttpProblem } from './httpProblem.ts';

/** Files from this size on are sent in pieces, so that a dropped line costs one piece and not the file. */
export const inPiecesFromBytes = 12 * 2 ** 20;
const pieceBytes = 4 * 2 ** 20;
const retryDelaysMs = [500, 1500, 4000, 10_000, 20_000];
const waitMs = 15_000;

export interface ResumableUpload {
  /** Last part of the address that the server gave the upload. */
  readonly done: Promise<string>;
  readonly pause: () => void;
  readonly resume: () => void;
  readonly stop: () => void;
}

export interface ResumableHandlers {
  readonly onProgress: (sentBytes: number) => void;
  /** The line is gone: it goes on by itself when it is back. */
  readonly onWaiting: (isWaiting: boolean) => void;
}

/**
 * Sends one file in pieces by the tus protocol. The same file chosen again, even after the page was closed, goes on where it
 * ended. `done` is rejected with an HttpProblem when the server refuses it, and with an AbortError when it is stopped.
 */
export function resumableUpload(file: File, endpoint: string, handlers: ResumableHandlers): ResumableUpload {
  let upload: Upload | null = null;
  let isPaused = false;
  let timer: ReturnType<typeof setTimeout> | undefined;
  let last = 0;
  let reject: (error: unknown) => void = () => undefined;

  const goOn = () => {
    clearTimeout(timer);
    if (!isPaused) upload?.start();
  };
  const lineGone = () => {
    if (!isPaused) handlers.onWaiting(true);
  };
  const settle = () => {
    clearTimeout(timer);
    window.removeEventListener('offline', lineGone);
    window.removeEventListener('online', goOn);
  };
  const done = new Promise<string>((resolve, refuse) => {
    reject = refuse;
    void import('tus-js-client').then(async ({ Upload: Sender }) => {
      const sender = new Sender(file, {
        endpoint,
        chunkSize: pieceBytes,
        retryDelays: retryDelaysMs,
        metadata: { filename: file.name },
        removeFingerprintOnSuccess: true,
        // A token from before a sign-in would be refused: each piece carries the newest.
        onBeforeRequest: (request) => {
          request.setHeader('x-csrf-token', currentCsrfToken());
          request.setHeader('accept-language', document.documentElement.lang || 'en');
        },
        onShouldRetry: (error) => mayPass(error),
        onProgress: (sent) => {
          // Each new try tells where it begins: only bytes that went out say that the line is back.
          if (navigator.onLine && sent !== last) handlers.onWaiting(false);
          last = sent;
          handlers.onProgress(sent);
        },
        onError: (error) => {
          if ('originalRequest' in error && mayPass(error)) {
            handlers.onWaiting(true);
            timer = setTimeout(goOn, waitMs);
            return;
          }
          settle();
          refuse(problemOf(error));
        },
        onSuccess: () => {
          settle();
          resolve(new URL(sender.url!, window.location.href).pathname.split('/').pop()!);
        },
      });
      upload = sender;
      const [earlier] = await sender.findPreviousUploads();
      if (earlier) sender.resumeFromPreviousUpload(earlier);
      window.addEventListener('online', goOn);
      window.addEventListener('offline', lineGone);
      goOn();
    }).catch(refuse);
  });

  return {
    done,
    pause: () => {
      isPaused = true;
      void upload?.abort();
    },
    resume: () => {
      isPaused = false;
      goOn();
    },
    stop: () => {
      settle();
      isPaused = true;
      void upload?.abort(true).catch(() => undefined);
      reject(new DOMException('Upload stopped.', 'AbortError'));
    },
  };
}

/** No answer, or an answer of something between here and the server: trying again may help. */
function mayPass(error: DetailedError): boolean {
  const status = error.originalResponse?.getStatus() ?? 0;
  return status === 0 || status >= 500 || status === 409 || status === 423;
}

function problemOf(error: Error | DetailedError): HttpProblem {
  const response = 'originalResponse' in error ? error.originalResponse : null;
  if (!response) return offlineProblem(error);
  let body: unknown = null;
  try {
    body = JSON.parse(response.getBody());
  } catch {
    // A gateway answers in its own words; the status says enough.
  }
  return problemFrom(response.getStatus(), body);
}
