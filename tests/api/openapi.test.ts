import request from 'supertest';
import { beforeAll, describe, expect, it } from 'vitest';
import type { EndpointSpec } from '../../shared/contracts/endpoint.ts';
import { endpoints } from '../../shared/contracts/index.ts';
import { useServer } from '../support/server.ts';

const server = useServer();
const table = Object.entries(endpoints as Record<string, EndpointSpec>).map(([name, spec]) => ({
  name,
  spec,
}));

interface Parameter {
  name: string;
  in: string;
  required?: boolean;
  schema: object;
}
interface Content {
  content: Record<string, { schema: Record<string, unknown>; example?: unknown }>;
}
interface Operation {
  operationId: string;
  summary: string;
  tags: string[];
  security: Record<string, string[]>[];
  parameters?: Parameter[];
  requestBody?: Content;
  responses: Record<string, Content & { description: string }>;
}
interface OpenApi {
  openapi: string;
  info: { title: string; version: string };
  servers: { url: string }[];
  paths: Record<string, Record<string, Operation>>;
  components: { securitySchemes: Record<string, object> };
}
let document: OpenApi;
let text: string;

beforeAll(async () => {
  const answer = await request(server.app).get('/api/openapi.json').expect(200);
  document = answer.body as OpenApi;
  text = answer.text;
});

const pathOf = (spec: EndpointSpec): string => `/api/v1${spec.path.replace(/:(\w+)/g, '{$1}')}`;
const operationOf = (spec: EndpointSpec): Operation =>
  document.paths[pathOf(spec)]![spec.method.toLowerCase()]!;
const keysOf = (schema: unknown): string[] =>
  Object.keys((schema as { shape?: object } | undefined)?.shape ?? {});

// Structure after the OpenAPI Specification 3.1.0 (value from memory: fields that it calls required).
describe('the OpenAPI document', () => {
  it('is a 3.1 document of this server', () => {
    expect(document.openapi).toMatch(/^3\.1\.\d+$/);
    expect(document.info).toMatchObject({ title: 'Cupel', version: expect.any(String) });
    expect(document.servers).toEqual([{ url: server.context.config.publicUrl }]);
  });

  it('has the endpoints of the table and no others', () => {
    const operations = Object.entries(document.paths).flatMap(([path, methods]) =>
      Object.keys(methods).map((method) => `${method} ${path}`),
    );
    const wanted = table.map(({ spec }) => `${spec.method.toLowerCase()} ${pathOf(spec)}`);
    expect(operations.sort()).toEqual(wanted.sort());
    const ids = Object.values(document.paths).flatMap((methods) =>
      Object.values(methods).map((o) => o.operationId),
    );
    expect(new Set(ids).size).toBe(table.length);
  });

  it.each(table)('describes $name: parameters, body, replies, security', ({ name, spec }) => {
    const operation = operationOf(spec);
    expect(operation).toMatchObject({ operationId: name, summary: spec.summary });
    const parameters = operation.parameters ?? [];
    const named = (place: string) => parameters.filter((parameter) => parameter.in === place);
    expect(named('path').map((parameter) => parameter.name)).toEqual(keysOf(spec.params));
    expect(named('query').map((parameter) => parameter.name)).toEqual(keysOf(spec.query));
    expect(named('path').every((parameter) => parameter.required === true)).toBe(true);
    expect(parameters.every((parameter) => typeof parameter.schema === 'object')).toBe(true);
    const types = Object.keys(operation.requestBody?.content ?? {});
    expect(types).toEqual(
      spec.kind === 'upload' ? ['multipart/form-data'] : spec.body ? ['application/json'] : [],
    );
    expect(Object.keys(operation.responses['200']!.content)).toEqual([
      spec.kind === 'download' ? 'text/csv' : 'application/json',
    ]);
    expect(Object.keys(operation.responses.default!.content)).toEqual(['application/problem+json']);
    expect(operation.security).toEqual(spec.access === 'public' ? [] : [{ session: [] }]);
  });

  it.each(table)('gives for $name an example that its reply schema takes', ({ spec }) => {
    const [content] = Object.values(operationOf(spec).responses['200']!.content);
    const parsed = spec.reply.safeParse(content!.example);
    expect(parsed.error).toBeUndefined();
    expect(parsed.data).toEqual(spec.example);
  });

  it('says of each body what is required and what may be sent', () => {
    const body = operationOf(endpoints['sites.add']).requestBody!.content['application/json']!.schema;
    expect(body).toMatchObject({
      type: 'object',
      required: ['name', 'zone'],
      properties: { name: { type: 'string', minLength: 1, maxLength: 80 }, zone: { type: 'string' } },
    });
  });

  it('refers to nothing that is not in it', () => {
    for (const [, reference] of text.matchAll(/"\$ref":"([^"]+)"/g)) {
      const parts = reference!.replace(/^#\//, '').split('/');
      const target = parts.reduce<unknown>((node, key) => (node as Record<string, unknown>)[key], document);
      expect({ reference, found: target !== undefined }).toEqual({ reference, found: true });
    }
  });

  it('tells nothing of the inside of the server, and is served without a session', () => {
    expect(text).not.toMatch(
      /password_?hash|token_?hash|drizzle|postgres|express|node_modules|graphile|lucia|\.ts\b|\/home\/|\/work\//i,
    );
    expect(text).not.toContain(server.context.config.databaseUrl);
  });
});
