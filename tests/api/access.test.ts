import request from 'supertest';
import { beforeAll, describe, expect, it } from 'vitest';
import { localMails, ownerships, persons, sites } from '../../server/db/schema/index.ts';
import { type Access, roles, targetParam } from '../../shared/contracts/access.ts';
import type { EndpointSpec } from '../../shared/contracts/endpoint.ts';
import { endpoints } from '../../shared/contracts/index.ts';
import { may } from '../../shared/rules/permissions.ts';
import { addSiteRows, type SiteRows } from '../support/site-rows.ts';
import { type Agent, origin, useServer } from '../support/server.ts';

const server = useServer();
const table = Object.entries(endpoints as Record<string, EndpointSpec>).map(([name, spec]) => ({
  name,
  spec,
}));
const withAccess = table.filter(({ spec }) => typeof spec.access === 'object') as {
  name: string;
  spec: EndpointSpec & { access: Exclude<Access, string> };
}[];
const guarded = withAccess.filter(({ spec }) => spec.access.on !== 'sites');
const onRows = guarded.filter(({ spec }) => spec.access.on !== 'company');
const lists = withAccess.filter(({ spec }) => spec.access.on === 'sites' && spec.method === 'GET');
const holders = [...roles, 'administrator'] as const;
type Holder = (typeof holders)[number];

const ownMark = 'Tarnby';
const foreignMark = 'Kallara';
const agents = {} as Record<Holder | 'nowhere' | 'atArchived', Agent>;
let own: SiteRows & Record<'personId' | 'localMailId', number>;
let foreign: typeof own;
let archivedSiteId: number;

beforeAll(async () => {
  const { db } = server.context;
  const [someone] = await db
    .insert(persons)
    .values({ name: 'Somebody Else', email: 'somebody.else@cupel.example' })
    .returning();
  const [kept] = await db
    .insert(localMails)
    .values({
      receivedAt: new Date(),
      messageId: '<1@cupel.example>',
      fromAddress: 'cupel@cupel.example',
      toAddress: 'somebody.else@cupel.example',
      subject: 'A mail',
      raw: Buffer.from('Subject: A mail\r\n\r\nHello'),
    })
    .returning();
  const company = { personId: someone!.id, localMailId: kept!.id };
  own = { ...(await addSiteRows(db, ownMark, someone!.id)), ...company };
  foreign = { ...(await addSiteRows(db, foreignMark, someone!.id)), ...company };
  const [closed] = await db
    .insert(sites)
    .values({ name: 'Closed Works', zone: 'Europe/Copenhagen', archivedAt: new Date() })
    .returning();
  archivedSiteId = closed!.id;
  for (const role of roles) agents[role] = await server.signedIn({ roles: [{ siteId: own.siteId, role }] });
  // Approving takes the role and the name on the data sheet; here it is the role that is tried.
  await db.insert(ownerships).values({
    siteId: own.siteId,
    softSensorId: own.softSensorId,
    approverId: agents.engineer.personId,
    effectiveFrom: new Date(),
    recordedBy: someone!.id,
  });
  agents.administrator = await server.signedIn({ administrator: true });
  agents.nowhere = await server.signedIn({});
  agents.atArchived = await server.signedIn({
    roles: roles.map((role) => ({ siteId: archivedSiteId, role })),
  });
});

const paramsOf = (spec: EndpointSpec): string[] =>
  [...spec.path.matchAll(/:(\w+)/g)].map((match) => match[1]!);

function addressOf(spec: EndpointSpec, rows: Record<string, number>): string {
  return `/api/v1${spec.path.replace(/:(\w+)/g, (_all, name: string) => String(rows[name] ?? `no-${name}`))}`;
}

/** The endpoint with an empty body: who is let in gets 200, or is told what is missing. */
function knock(agent: Pick<Agent, 'get'>, spec: EndpointSpec, address: string) {
  const send = agent as unknown as Record<string, (address: string) => request.Test>;
  const asked = send[spec.method.toLowerCase()]!(address).set('Origin', origin);
  return spec.method === 'GET' ? asked : asked.send({});
}

function mayHere(holder: Holder, spec: EndpointSpec & { access: Exclude<Access, string> }): boolean {
  const held = holder === 'administrator' ? [] : [{ siteId: 1, role: holder }];
  const siteId = spec.access.on === 'company' ? null : 1;
  return may({ id: 0, administrator: holder === 'administrator', roles: held }, spec.access.may, siteId);
}

const needsQuery = (spec: EndpointSpec): boolean => spec.query?.safeParse({}).success === false;

const textOf = (answer: request.Response): string => `${JSON.stringify(answer.body)}${answer.text ?? ''}`;

describe('the endpoint table', () => {
  it('names in each path the row that the endpoint acts on, and no other row of a site', () => {
    const rowParams = Object.values(targetParam);
    for (const { name, spec } of withAccess) {
      const { on } = spec.access;
      const wanted = on === 'company' || on === 'sites' ? [] : [targetParam[on]];
      expect({ name, rows: paramsOf(spec).filter((param) => rowParams.includes(param)) }).toEqual({
        name,
        rows: wanted,
      });
    }
  });

  it('declares a schema for every path parameter, a body for every change and none for a question', () => {
    for (const { name, spec } of table) {
      const declared = Object.keys((spec.params as { shape?: object } | undefined)?.shape ?? {});
      expect({ name, params: declared }).toEqual({ name, params: paramsOf(spec) });
      const body = spec.method !== 'GET' && spec.kind !== 'upload' && spec.method !== 'DELETE';
      expect({ name, body: spec.body !== undefined }).toEqual({ name, body });
      expect({ name, limited: spec.maxBytes !== undefined }).toEqual({
        name,
        limited: spec.kind === 'upload',
      });
    }
  });

  it('has one endpoint for each method and path', () => {
    const addresses = table.map(({ spec }) => `${spec.method} ${spec.path.replace(/:\w+/g, ':')}`);
    expect(new Set(addresses).size).toBe(addresses.length);
  });
});

describe('nobody', () => {
  it.each(table)('$name asks for a session unless it is public', async ({ spec }) => {
    const answer = await knock(request(server.app), spec, addressOf(spec, own));
    if (spec.access === 'public') expect([401, 403, 404]).not.toContain(answer.status);
    else
      expect({ status: answer.status, code: answer.body.code }).toEqual({
        status: 401,
        code: 'not-signed-in',
      });
  });
});

describe('at the own site', () => {
  it.each(guarded)('$name lets in exactly the roles of the matrix', async ({ spec }) => {
    const outcome: Record<string, string> = {};
    const wanted: Record<string, string> = {};
    for (const holder of holders) {
      const { status } = await knock(agents[holder], spec, addressOf(spec, own));
      outcome[holder] = [401, 403, 404].includes(status) ? String(status) : 'let in';
      wanted[holder] = mayHere(holder, spec) ? 'let in' : '403';
      expect(status).not.toBe(500);
    }
    expect(outcome).toEqual(wanted);
  });

  it.each(guarded.filter(({ spec }) => spec.method === 'GET'))(
    '$name shows nothing of another site',
    async ({ spec }) => {
      for (const role of roles) {
        const answer = await knock(agents[role], spec, addressOf(spec, own));
        expect(textOf(answer)).not.toContain(foreignMark);
      }
    },
  );

  it.each(guarded.filter(({ spec }) => spec.method === 'GET' && spec.kind === 'json' && !needsQuery(spec)))(
    '$name answers as its schema promises',
    async ({ spec }) => {
      const agent = spec.access.on === 'company' ? agents.administrator : agents.engineer;
      const answer = await knock(agent, spec, addressOf(spec, own)).expect(200);
      expect(spec.reply.safeParse(answer.body).error).toBeUndefined();
    },
  );
});

describe('at a foreign site', () => {
  it.each(onRows)('$name is not found, whatever the role elsewhere', async ({ spec }) => {
    for (const who of [...roles, 'nowhere', 'atArchived'] as const) {
      const answer = await knock(agents[who], spec, addressOf(spec, foreign));
      expect({ who, status: answer.status, code: answer.body.code }).toEqual({
        who,
        status: 404,
        code: 'not-found',
      });
      expect(answer.text).not.toContain(foreignMark);
    }
  });

  it.each(onRows)('$name answers alike for a row elsewhere and for none at all', async ({ spec }) => {
    const nothing = Object.fromEntries(paramsOf(spec).map((param) => [param, 999_999_999]));
    const [elsewhere, none] = await Promise.all([
      knock(agents.engineer, spec, addressOf(spec, foreign)),
      knock(agents.engineer, spec, addressOf(spec, nothing)),
    ]);
    expect({ ...none.body, requestId: '' }).toEqual({ ...elsewhere.body, requestId: '' });
  });

  it.each(onRows.filter(({ spec }) => spec.access.on === 'site'))(
    '$name treats an archived site as foreign to all but administrators',
    async ({ spec }) => {
      const answer = await knock(
        agents.atArchived,
        spec,
        addressOf(spec, { ...own, siteId: archivedSiteId }),
      );
      expect(answer.status).toBe(404);
    },
  );
});

describe('lists over sites', () => {
  it.each(lists)('$name shows rows of sites where the role may, and no others', async ({ spec }) => {
    for (const role of roles) {
      const answer = await knock(agents[role], spec, addressOf(spec, own)).expect(200);
      expect({ role, own: textOf(answer).includes(ownMark) }).toEqual({ role, own: mayHere(role, spec) });
      expect(textOf(answer)).not.toContain(foreignMark);
    }
    for (const who of ['nowhere', 'atArchived'] as const) {
      const answer = await knock(agents[who], spec, addressOf(spec, own)).expect(200);
      expect(textOf(answer)).not.toMatch(new RegExp(`${ownMark}|${foreignMark}`));
    }
  });

  it.each(lists)(
    '$name shows nothing of a foreign site that is asked for by its number',
    async ({ spec }) => {
      for (const role of roles) {
        const answer = await knock(
          agents[role],
          spec,
          `${addressOf(spec, own)}?siteId=${foreign.siteId}`,
        ).expect(200);
        expect(textOf(answer)).not.toContain(foreignMark);
      }
    },
  );

  it.each(lists)('$name shows the other site to who has a role there', async ({ spec }) => {
    const there = await server.signedIn({ roles: roles.map((role) => ({ siteId: foreign.siteId, role })) });
    const answer = await knock(there, spec, addressOf(spec, own)).expect(200);
    expect(textOf(answer)).toContain(foreignMark);
    expect(textOf(answer)).not.toContain(ownMark);
  });
});
