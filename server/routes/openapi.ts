import { z } from 'zod';
import { account } from './described/account.ts';
import { field } from './described/field.ts';
import { files } from './described/files.ts';
import { ground } from './described/ground.ts';
import { harvest } from './described/harvest.ts';
import { lab } from './described/lab.ts';
import { lots } from './described/lots.ts';
import type { Operation, Operations } from './described/operation.ts';
import { plans } from './described/plans.ts';
import { zonings } from './described/zonings.ts';

/** Every operation; a test holds them against the routes that are served and against what these answer. */
export const operations: Operations = { ...account, ...ground, ...files, ...zonings, ...plans, ...field, ...lab, ...lots, ...harvest };

/** The interface in OpenAPI 3.1. */
export function describedApi(): Record<string, unknown> {
  const paths: Record<string, Record<string, unknown>> = {};
  for (const [key, operation] of Object.entries(operations)) {
    const [method, route] = key.split(' ') as [string, string];
    const path = `/api${route.replace(/:(\w+)/g, '{$1}')}`;
    paths[path] = { ...paths[path], [method]: described(method, route, operation) };
  }
  return {
    openapi: '3.1.0',
    info: { title: 'Patchrow', version: '1', description: 'Sign in with POST /api/session; every write carries the token of GET /api/session in the header x-csrf-token.' },
    components: { securitySchemes: { cookie: { type: 'apiKey', in: 'cookie', name: 'patchrow' } }, schemas: { Problem: json(problem, 'output') } },
    paths,
  };
}

const problem = z.looseObject({ type: z.string(), title: z.string(), status: z.int(), detail: z.string().optional(), code: z.string() }).describe('RFC 9457');

const json = (schema: z.ZodType, io: 'input' | 'output') => z.toJSONSchema(schema, { io, unrepresentable: 'any' }) as Record<string, unknown>;

function described(method: string, route: string, { does, query, body, files: takesFiles, conditional, answer, type, status = 200 }: Operation): Record<string, unknown> {
  const isPublic = !route.startsWith('/estates') && !route.startsWith('/account');
  const media = answer ? { 'application/json': { schema: json(answer, 'output') } } : type ? { [type]: {} } : undefined;
  return {
    summary: does,
    ...(isPublic ? {} : { security: [{ cookie: [] }] }),
    parameters: [...inPath(route), ...(query ? inQuery(query) : []), ...(method === 'get' ? [] : [header('x-csrf-token')]), ...(conditional ? [header('if-match')] : [])],
    ...(body ? { requestBody: { required: true, content: { 'application/json': { schema: json(body, 'input') } } } } : {}),
    ...(takesFiles ? { requestBody: { required: true, content: { 'multipart/form-data': { schema: { type: 'object', properties: { files: { type: 'array', items: { type: 'string', format: 'binary' } } } } } } } } : {}),
    responses: {
      [status]: { description: 'Done', ...(media ? { content: media } : {}) },
      default: { description: 'Problem', content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } } },
    },
  };
}

const header = (name: string) => ({ name, in: 'header', required: true, schema: { type: 'string' } });

function inPath(route: string): unknown[] {
  return [...route.matchAll(/:(\w+)/g)].map(([, name]) => ({ name, in: 'path', required: true, schema: { type: 'string' } }));
}

function inQuery(query: z.ZodType): unknown[] {
  const { properties = {}, required = [] } = json(query, 'input') as { properties?: Record<string, unknown>; required?: string[] };
  return Object.entries(properties).map(([name, schema]) => ({ name, in: 'query', required: required.includes(name), schema }));
}
