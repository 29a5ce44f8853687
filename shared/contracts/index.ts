import { audit } from './audit.ts';
import { boards } from './board.ts';
import { calibrations } from './calibrations.ts';
import { duties } from './duties.ts';
import type { EndpointSpec } from './endpoint.ts';
import { events } from './events.ts';
import { history } from './history.ts';
import { judging } from './judging.ts';
import { laboratory } from './laboratory.ts';
import { mail } from './mail.ts';
import { models } from './models.ts';
import { ownership } from './ownership.ts';
import { people } from './people.ts';
import { register } from './register.ts';
import { runs } from './runs.ts';
import { samples } from './samples.ts';
import { sampling } from './sampling.ts';
import { sites } from './sites.ts';
import { tags } from './tags.ts';

/** Every endpoint under /api/v1: routes, client, OpenAPI document and the access test all come from this table. */
export const endpoints = {
  ...people,
  ...sites,
  ...tags,
  ...runs,
  ...history,
  ...samples,
  ...laboratory,
  ...sampling,
  ...register,
  ...models,
  ...judging,
  ...calibrations,
  ...events,
  ...duties,
  ...ownership,
  ...boards,
  ...mail,
  ...audit,
} satisfies Record<string, EndpointSpec>;

export type Endpoints = typeof endpoints;
export type EndpointName = keyof Endpoints;
