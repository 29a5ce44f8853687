import { OpenApiGeneratorV31, OpenAPIRegistry, extendZodWithOpenApi } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import type { EndpointSpec } from '../../shared/contracts/endpoint.ts';
import { problem } from '../../shared/contracts/errors.ts';
import { endpoints } from '../../shared/contracts/index.ts';

extendZodWithOpenApi(z);

/** The OpenAPI document of the endpoint table. */
export function openApiDocument(publicUrl: string) {
  const registry = new OpenAPIRegistry();
  const cookie = registry.registerComponent('securitySchemes', 'session', {
    type: 'apiKey',
    in: 'cookie',
    name: 'cupel_session',
  });
  for (const [name, spec] of Object.entries(endpoints as Record<string, EndpointSpec>)) {
    registry.registerPath({
      operationId: name,
      method: spec.method.toLowerCase() as 'get',
      path: `/api/v1${spec.path.replace(/:(\w+)/g, '{$1}')}`,
      summary: spec.summary,
      tags: [name.split('.')[0]!],
      security: spec.access === 'public' ? [] : [{ [cookie.name]: [] }],
      request: requestOf(spec),
      responses: {
        200: {
          description: 'Done',
          content: { [replyType(spec)]: { schema: spec.reply, example: spec.example } },
        },
        default: {
          description: 'Problem details (RFC 9457)',
          content: { 'application/problem+json': { schema: problem } },
        },
      },
    });
  }
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: { title: 'Cupel', version: '1', description: 'A registry of soft sensors.' },
    servers: [{ url: publicUrl }],
  });
}

const replyType = (spec: EndpointSpec) => (spec.kind === 'download' ? 'text/csv' : 'application/json');

function requestOf(spec: EndpointSpec) {
  const file = z.object({ file: z.string().openapi({ format: 'binary' }) });
  return {
    ...(spec.params ? { params: spec.params as never } : {}),
    ...(spec.query ? { query: spec.query as never } : {}),
    ...(spec.kind === 'upload'
      ? { body: { content: { 'multipart/form-data': { schema: file } } } }
      : spec.body
        ? { body: { content: { 'application/json': { schema: spec.body } } } }
        : {}),
  };
}
