import express, { type Express, type Request } from 'express';
import { isDeepStrictEqual } from 'node:util';
import { operations } from '../../../server/routes/openapi.ts';

/**
 * The application with every answer in JSON held against its description: a field that is missing, of another kind, or not
 * described at all is a fault. So every test that speaks to the interface is a test of its description.
 */
export function holdToDescription(app: Express): { server: Express; faults: () => string[] } {
  const faults = new Set<string>();
  const server = express();
  server.disable('x-powered-by');
  server.use((request, response, next) => {
    const send = response.json;
    response.json = function held(body: unknown) {
      const fault = response.statusCode < 400 ? faultIn(request, response.statusCode, JSON.parse(JSON.stringify(body ?? null))) : null;
      if (fault !== null) faults.add(fault);
      return send.call(this, body);
    };
    next();
  });
  server.use(app);
  return { server, faults: () => [...faults] };
}

/** What is wrong with an answer, or null; addresses that are no operations, such as the description itself, are let pass. */
function faultIn(request: Request, status: number, body: unknown): string | null {
  const { route } = request as { route?: { path: string } };
  const base = request.baseUrl.replace(/^\/api/, '').replace(/^\/estates\/[^/]+/, '/estates/:estateId');
  const key = `${request.method.toLowerCase()} ${base}${route?.path === '/' ? '' : (route?.path ?? '')}`;
  const operation = operations[key];
  if (!operation) return null;
  if ((operation.status ?? 200) !== status) return `${key} answered ${status}`;
  if (!operation.answer) return operation.type ? null : `${key} answers what is not described`;
  const read = operation.answer.safeParse(body);
  if (!read.success) return `${key}: ${read.error.issues.slice(0, 3).map(({ path, message }) => `${path.join('.')}: ${message}`).join('; ')}`;
  const described: unknown = JSON.parse(JSON.stringify(read.data ?? null));
  return isDeepStrictEqual(described, body) ? null : `${key}: ${differenceOf(described, body)} is not described`;
}

/** Where two values first differ, as a path. */
function differenceOf(one: unknown, other: unknown, path = ''): string {
  if (typeof one !== 'object' || typeof other !== 'object' || one === null || other === null) return `${path} (${JSON.stringify(other)?.slice(0, 60)})`;
  const keys = [...new Set([...Object.keys(one), ...Object.keys(other)])];
  const key = keys.find((each) => !isDeepStrictEqual((one as Record<string, unknown>)[each], (other as Record<string, unknown>)[each]))!;
  return differenceOf((one as Record<string, unknown>)[key], (other as Record<string, unknown>)[key], path === '' ? key : `${path}.${key}`);
}
