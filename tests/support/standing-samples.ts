import type { HeldSample, SampleHistory } from '../../shared/contracts/standing-samples.ts';
import { type Laboratory, makeLaboratory } from './laboratory.ts';
import type { Agent, TestServer } from './server.ts';

/** A laboratory with an engineer beside the technician, a second site, and ways to make and change single samples. */
export interface Standing {
  lab: Laboratory;
  other: Laboratory;
  engineer: Agent;
  /** A sample of the site, taken on 20 Nov 2026 06:00 UTC. */
  addSample(own?: {
    held?: boolean;
    value?: number;
    importId?: number;
    compositeMs?: number;
  }): Promise<number>;
  correct(id: number, body: object, agent?: Agent): ReturnType<Agent['post']>;
  historyOf(id: number, agent?: Agent): Promise<SampleHistory>;
  heldNow(): Promise<HeldSample[]>;
  /** A counted pair of a sample, in the evidence of a decided recalibration. */
  decideOn(sampleId: number, decision?: 'approved' | 'declined'): Promise<number>;
  sql<Row extends object>(text: string, values?: unknown[]): Promise<Row[]>;
}

export const v1 = (path: string) => `/api/v1${path}`;

export async function makeStanding(server: TestServer): Promise<Standing> {
  const lab = await makeLaboratory(server);
  const other = await makeLaboratory(server, 'Kallara');
  const roles = [{ siteId: lab.siteId, role: 'engineer' as const }];
  const engineer = await server.signedIn({ name: 'Marco Castellane', roles });
  const sql: Standing['sql'] = async <Row extends object>(text: string, values: unknown[] = []) =>
    (await server.context.pool.query<Row>(text, values)).rows;
  return {
    lab,
    other,
    engineer,
    sql,
    addSample: sampleAdder(lab, sql),
    correct: (id, body, agent = lab.technician) =>
      agent.post(v1(`/samples/${id}/correct`)).send({ version: 1, reason: 'Typed wrongly', ...body }),
    historyOf: async (id, agent = lab.technician) =>
      (await agent.get(v1(`/samples/${id}/history`)).expect(200)).body as SampleHistory,
    heldNow: async () =>
      (await lab.technician.get(v1(`/sites/${lab.siteId}/held`)).expect(200)).body.rows as HeldSample[],
    decideOn: decider(lab, engineer, sql),
  };
}

function sampleAdder(lab: Laboratory, sql: Standing['sql']): Standing['addSample'] {
  let counter = 0;
  return async (own = {}) => {
    const [row] = await sql<{ id: string }>(
      `insert into samples (site_id, sample_point_id, method_id, sample_number, taken_at, reported_at, value, unit, as_written,
         held_since, import_id, composite_ms, entered_by, entered_at)
       values ($1, $2, $3, $4, '2026-11-20T06:00:00Z', '2026-11-20T08:00:00Z', $5::float8, '°C', $5::float8::text, $6, $7, $8, $9,
         now()) returning id`,
      [
        lab.siteId,
        lab.samplePointId,
        lab.methodId,
        `KX-${++counter}`,
        own.value ?? 1480,
        own.held ? '2026-11-20T08:00:00Z' : null,
        own.importId ?? null,
        own.compositeMs ?? null,
        lab.technician.personId,
      ],
    );
    return Number(row!.id);
  };
}

function decider(lab: Laboratory, engineer: Agent, sql: Standing['sql']): Standing['decideOn'] {
  return async (sampleId, decision = 'approved') => {
    const [pair] = await sql<{ id: string }>(
      `insert into pairs (site_id, soft_sensor_id, sample_id, taken_at, reported_at, reference, estimate, error, origin, computed_at)
       select site_id, $2, id, taken_at, reported_at, value, value + 2, 2, 'recorded', now() from samples where id = $1 returning id`,
      [sampleId, lab.softSensorId],
    );
    const effective = decision === 'approved' ? 'now()' : 'null';
    const [row] = await sql<{ id: number }>(
      `insert into calibrations (site_id, soft_sensor_id, revision_id, number, kind, slope, "offset", slope_before, offset_before,
         evidence, pair_ids, reason, proposed_at, proposed_by, to_be_entered, decision, decided_at, decided_by, effective_from)
       select c.site_id, c.soft_sensor_id, c.revision_id, (select max(number) + 1 from calibrations where soft_sensor_id = $2),
         'bias', 1, -2, 1, 0, c.evidence, array[$1::bigint], 'Reads high', now(), $3, false, $4, now(), $5, ${effective}
       from calibrations c where c.soft_sensor_id = $2 order by number limit 1 returning id`,
      [pair!.id, lab.softSensorId, lab.technician.personId, decision, engineer.personId],
    );
    return row!.id;
  };
}
