import type { z } from 'zod';
import addresses from 'virtual:endpoint-addresses';
import type { EndpointName, Endpoints } from '../../shared/contracts/index.ts';
import type { EndpointSpec, Given } from '../../shared/contracts/endpoint.ts';
import { ApiProblem } from './problem.ts';

type Wire<E extends EndpointSpec> = z.input<E['reply']>;
type Part<E extends EndpointSpec, K extends 'params' | 'query' | 'body'> =
  Given<E, K> extends undefined
    ? { [P in K]?: undefined }
    : K extends 'query'
      ? { query?: Given<E, K> }
      : { [P in K]: Given<E, K> };
type Inputs<E extends EndpointSpec> = Part<E, 'params'> & Part<E, 'query'> & Part<E, 'body'>;
type Values = Record<string, unknown> | undefined;

/** Calls one endpoint of the table; resolves to its reply, rejects with an ApiProblem. */
export async function call<N extends EndpointName>(
  name: N,
  inputs: Inputs<Endpoints[N]>,
): Promise<Wire<Endpoints[N]>> {
  const [method, path, takesBody] = addresses[name]!;
  const parts = inputs as { params?: Values; query?: Values; body?: unknown };
  const body = takesBody ? JSON.stringify(parts.body ?? {}) : undefined;
  const response = await fetch(addressOf(path, parts.params, parts.query), {
    method,
    credentials: 'same-origin',
    headers: body === undefined ? {} : { 'Content-Type': 'application/json' },
    body,
  }).catch(() => {
    throw ApiProblem.offline();
  });
  const text = await response.text();
  if (!response.ok) throw ApiProblem.from(response.status, text);
  return JSON.parse(text) as Wire<Endpoints[N]>;
}

/** Address of an endpoint, for links to downloads. */
export function addressOfEndpoint<N extends EndpointName>(
  name: N,
  params: Record<string, string | number>,
): string {
  return addressOf(addresses[name]![1], params, undefined);
}

function addressOf(pattern: string, params: Values, query: Values): string {
  const path = pattern.replace(/:(\w+)/g, (_whole, key: string) => encodeURIComponent(String(params?.[key])));
  const search = new URLSearchParams();
  for (const [key, value] of Object.entries(query ?? {})) {
    if (value !== undefined && value !== null && value !== '') search.set(key, String(value));
  }
  const text = search.toString();
  return `/api/v1${path}${text ? `?${text}` : ''}`;
}

type UploadName = { [N in EndpointName]: Endpoints[N]['kind'] extends 'upload' ? N : never }[EndpointName];

/** Sends a file; `onProgress` gets the share sent, 0 to 1. XMLHttpRequest, because fetch tells no upload progress. */
export function upload<N extends UploadName>(
  name: N,
  params: Given<Endpoints[N], 'params'>,
  file: File,
  onProgress: (share: number) => void = () => {},
  query: Values = undefined,
): Promise<Wire<Endpoints[N]>> {
  const [method, path] = addresses[name]!;
  const form = new FormData();
  form.append('file', file, file.name);
  return new Promise((resolve, reject) => {
    const request = new XMLHttpRequest();
    request.open(method, addressOf(path, params as Values, query));
    request.upload.onprogress = (event) => onProgress(event.total > 0 ? event.loaded / event.total : 0);
    request.onerror = () => reject(ApiProblem.offline());
    request.onload = () => {
      if (request.status >= 200 && request.status < 300)
        resolve(JSON.parse(request.responseText) as Wire<Endpoints[N]>);
      else reject(ApiProblem.from(request.status, request.responseText));
    };
    request.send(form);
  });
}
