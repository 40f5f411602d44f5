import { offlineProblem, problemFrom, HttpProblem } from './httpProblem.ts';
import { withinTime } from './withinTime.ts';

/** The only door to the server: cookie session, CSRF header on writes, refusals in the language of the page, problem+json turned into HttpProblem. */

type QueryValue = string | number | boolean | null | undefined;

export interface RequestOptions {
  readonly query?: Readonly<Record<string, QueryValue>>;
  readonly signal?: AbortSignal;
  /** Version that the change is based on; the server answers 409 or 412 when somebody was faster. */
  readonly ifMatch?: string | number;
  /** Given up after so long, as if there were no signal: on a line that has died a browser waits for minutes. */
  readonly withinMs?: number;
  /** Sent by the screen itself: nobody misses it when it was not taken. */
  readonly unasked?: boolean;
}

export interface Tagged<T> {
  readonly data: T;
  readonly etag: string | null;
}

export interface UploadOptions extends RequestOptions {
  readonly onProgress?: (sentBytes: number, totalBytes: number) => void;
}

type Method = 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';

let csrfToken = '';
let onSignedOut: (untaken: boolean) => void = () => undefined;
let onContact: (reached: boolean, serverTime: Date | null) => void = () => undefined;

/** The session says which token writes need; it changes at sign-in. */
export function setCsrfToken(token: string): void {
  csrfToken = token;
}

/** The token of this session, for requests that do not go through here. */
export function currentCsrfToken(): string {
  return csrfToken;
}

/** Called when the server says that nobody is signed in any more; `untaken`: in answer to a change, which it did not take. */
export function whenSignedOut(handler: (untaken: boolean) => void): void {
  onSignedOut = handler;
}

/** Called after every request: true when the server answered at all, and the time of its clock where it told. */
export function whenContacted(handler: (reached: boolean, serverTime: Date | null) => void): void {
  onContact = handler;
}

export const http = {
  get: <T>(path: string, options?: RequestOptions) => json<T>('GET', path, undefined, options),
  post: <T>(path: string, body?: unknown, options?: RequestOptions) => json<T>('POST', path, body, options),
  put: <T>(path: string, body?: unknown, options?: RequestOptions) => json<T>('PUT', path, body, options),
  patch: <T>(path: string, body?: unknown, options?: RequestOptions) => json<T>('PATCH', path, body, options),
  delete: <T = void>(path: string, options?: RequestOptions) => json<T>('DELETE', path, undefined, options),

  /** With the entity tag that a later change sends back as `ifMatch`. */
  async getTagged<T>(path: string, options: RequestOptions = {}): Promise<Tagged<T>> {
    const response = await send('GET', path, { options });
    return { data: (await response.json()) as T, etag: response.headers.get('etag') };
  },

  /** Raw bytes, such as the cells of a layer. */
  async getBytes(path: string, options: RequestOptions = {}): Promise<ArrayBuffer> {
    return (await send('GET', path, { options })).arrayBuffer();
  },

  upload,
  download,
};

async function json<T>(method: Method, path: string, body: unknown, options: RequestOptions = {}): Promise<T> {
  const response = await send(method, path, { options: withinTime(options), body });
  if (response.status === 204) return undefined as T;
  return (await readBody(response, isChange(method, path))) as T;
}

/** An answer that breaks off, or that a hotel's sign-in page gave in place of the server, is none. */
async function readBody(response: Response, sent = false): Promise<unknown> {
  try {
    return await response.json();
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    onContact(false, null);
    throw offlineProblem(error, { sent });
  }
}

const doors = ['/api/session', '/api/crew/session'];
/** Whether a request changes what is kept; signing in and out keeps nothing. */
const isChange = (method: Method, path: string) => method !== 'GET' && !doors.includes(path);

interface Sending {
  options: RequestOptions;
  body?: unknown;
}

async function send(method: Method, path: string, { options, body }: Sending, retried = false): Promise<Response> {
  // A screen that opened from what the device holds has no token yet.
  if (method !== 'GET' && csrfToken === '' && !retried) await isTokenRenewed(options);
  const response = await reach(addressOf(path, options.query), {
    method,
    credentials: 'same-origin',
    headers: headersOf(method, body, options),
    ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    ...(options.signal ? { signal: options.signal } : {}),
  }, isChange(method, path));
  if (response.ok) return response;
  const problem = problemFrom(response.status, await response.json().catch(() => null));
  // A token from before a sign-in in another tab is refused: when the session has a newer one, ask once more.
  if (problem.status === 403 && method !== 'GET' && !retried && (await isTokenRenewed(options))) return send(method, path, { options, body }, true);
  if (problem.status === 401 && !doors.includes(path)) onSignedOut(method !== 'GET' && !options.unasked);
  throw problem;
}

async function reach(address: string, init: RequestInit, sends = false): Promise<Response> {
  // A device that knows itself to be without a line sends nothing.
  const sent = sends && navigator.onLine;
  try {
    const response = await fetch(address, init);
    // A gateway that cannot find the server is no contact either.
    const reached = response.status !== 502 && response.status !== 504;
    onContact(reached, reached ? serverTimeOf(response) : null);
    if (!reached) throw offlineProblem(undefined, { sent });
    return response;
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    if (error instanceof HttpProblem) throw error;
    onContact(false, null);
    throw offlineProblem(error, { sent });
  }
}

/** The server's clock at the answer, to the second (RFC 9110, Date). */
function serverTimeOf(response: Response): Date | null {
  const time = Date.parse(response.headers.get('date') ?? '');
  return Number.isNaN(time) ? null : new Date(time);
}

function headersOf(method: Method, body: unknown, options: RequestOptions): Record<string, string> {
  return {
    accept: 'application/json, application/problem+json',
    'accept-language': document.documentElement.lang || 'en',
    ...(body === undefined ? {} : { 'content-type': 'application/json' }),
    ...(method === 'GET' ? {} : { 'x-csrf-token': csrfToken }),
    ...(options.ifMatch === undefined ? {} : { 'if-match': tagText(options.ifMatch) }),
  };
}

function tagText(version: string | number): string {
  return typeof version === 'number' ? `"${version}"` : version;
}

function addressOf(path: string, query: RequestOptions['query'] = {}): string {
  const entries = Object.entries(query).filter(([, value]) => value !== null && value !== undefined);
  if (entries.length === 0) return path;
  return `${path}?${new URLSearchParams(entries.map(([key, value]) => [key, String(value)])).toString()}`;
}

async function isTokenRenewed({ signal }: RequestOptions): Promise<boolean> {
  const before = csrfToken;
  const response = await reach('/api/session', { credentials: 'same-origin', headers: { accept: 'application/json' }, ...(signal ? { signal } : {}) });
  const session = (await readBody(response)) as { csrfToken: string };
  setCsrfToken(session.csrfToken);
  return session.csrfToken !== before;
}

/** Multipart upload that says how far it is; fetch cannot. Field name `files`, other fields as text. `withinMs` counts from the last sign of life. */
function upload<T>(path: string, form: FormData, options: UploadOptions = {}): Promise<T> {
  return new Promise<T>((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open('POST', addressOf(path, options.query));
    request.responseType = 'json';
    request.setRequestHeader('accept', 'application/json, application/problem+json');
    request.setRequestHeader('accept-language', document.documentElement.lang || 'en');
    request.setRequestHeader('x-csrf-token', csrfToken);
    const patience = patienceOf(request, options.withinMs);
    request.upload.onprogress = (event) => {
      patience.more();
      options.onProgress?.(event.loaded, event.total);
    };
    request.onloadend = patience.end;
    request.onload = () => {
      onContact(true, null);
      if (request.status >= 200 && request.status < 300) return resolve(request.response as T);
      const problem = problemFrom(request.status, request.response);
      if (problem.status === 401) onSignedOut(true);
      reject(problem);
    };
    request.onerror = () => {
      onContact(false, null);
      reject(offlineProblem());
    };
    request.onabort = () => reject(patience.isOver() ? offlineProblem() : new DOMException('Upload stopped.', 'AbortError'));
    options.signal?.addEventListener('abort', () => request.abort());
    request.send(form);
  });
}

interface Patience {
  more: () => void;
  end: () => void;
  isOver: () => boolean;
}

/** Ends an upload that has shown no sign of life for so long. */
function patienceOf(request: XMLHttpRequest, withinMs: number | undefined): Patience {
  let timer: ReturnType<typeof setTimeout> | undefined;
  let isOver = false;
  const end = (): void => clearTimeout(timer);
  const more = (): void => {
    end();
    if (withinMs === undefined) return;
    timer = setTimeout(() => {
      isOver = true;
      onContact(false, null);
      request.abort();
    }, withinMs);
  };
  more();
  return { more, end, isOver: () => isOver };
}

/** Fetches a file and hands it to the browser under the name the server gave, or the one given here; `POST` where making it is a deed. */
async function download(path: string, fallbackName: string, options: RequestOptions & { method?: 'GET' | 'POST' } = {}): Promise<string> {
  const response = await send(options.method ?? 'GET', path, { options });
  const name = fileNameFrom(response.headers.get('content-disposition')) ?? fallbackName;
  const address = URL.createObjectURL(await response.blob());
  const link = document.createElement('a');
  link.href = address;
  link.download = name;
  link.click();
  // Some browsers start reading only after the click returns.
  setTimeout(() => URL.revokeObjectURL(address), 30_000);
  return name;
}

/** File name of a content-disposition header (RFC 6266: the starred form wins). */
export function fileNameFrom(header: string | null): string | null {
  if (header === null) return null;
  const starred = /filename\*\s*=\s*UTF-8''([^;]+)/i.exec(header)?.[1];
  if (starred !== undefined) return decodeURIComponent(starred.trim());
  return /filename\s*=\s*"([^"]*)"/i.exec(header)?.[1] ?? /filename\s*=\s*([^;\s]+)/i.exec(header)?.[1] ?? null;
}
