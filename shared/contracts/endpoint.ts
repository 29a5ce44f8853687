import { z } from 'zod';
import type { Access } from './access.ts';

export type Method = 'GET' | 'POST' | 'PUT' | 'DELETE';

/** json: JSON in and out. upload: multipart with one `file`. download: a file comes back. */
export type EndpointKind = 'json' | 'upload' | 'download';

export interface EndpointSpec {
  method: Method;
  /** Express path below /api/v1. */
  path: string;
  kind: EndpointKind;
  summary: string;
  access: Access;
  params?: z.ZodType;
  query?: z.ZodType;
  body?: z.ZodType;
  reply: z.ZodType;
  /** One reply, shown in the OpenAPI document. */
  example: unknown;
  /** Largest upload in bytes; beyond it the answer is 413. */
  maxBytes?: number;
}

/** Declares an endpoint; an example that doesn't fit its reply doesn't compile. */
export function endpoint<const E extends EndpointSpec>(spec: E & { example: z.input<E['reply']> }): E {
  return spec;
}

type Part<E extends EndpointSpec, K extends 'params' | 'query' | 'body'> = E[K] extends z.ZodType
  ? E[K]
  : never;

/** What a handler receives, and what a client must give, for one part of an endpoint. */
export type Received<E extends EndpointSpec, K extends 'params' | 'query' | 'body'> = [Part<E, K>] extends [
  never,
]
  ? undefined
  : z.output<Part<E, K>>;
export type Given<E extends EndpointSpec, K extends 'params' | 'query' | 'body'> = [Part<E, K>] extends [
  never,
]
  ? undefined
  : z.input<Part<E, K>>;
export type Reply<E extends EndpointSpec> = z.output<E['reply']>;

/** A row id in a path or a query. */
export const idText = z
  .string()
  .regex(/^[1-9]\d{0,8}$/, 'must be a number')
  .transform(Number);
export const idNumber = z.number().int().positive();

/** Path parameters: `ids('siteId')` is { siteId: number }. */
export function ids<const K extends string>(...names: K[]) {
  return z.object(Object.fromEntries(names.map((name) => [name, idText])) as Record<K, typeof idText>);
}

export const isoInstant = z.iso.datetime({
  offset: true,
  message: 'must be an instant such as 2026-11-29T14:00:00Z',
});
export const nothing = z.object({});

/** A sentence-sized text that must not be blank. */
export const shortText = (label: string, max = 120) =>
  z.string().trim().min(1, `Write ${label}.`).max(max, `Keep ${label} under ${max} characters.`);
export const longText = z.string().trim().max(4000, 'Keep it under 4,000 characters.');
export const version = z.number().int().positive();
