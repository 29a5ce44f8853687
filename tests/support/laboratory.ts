import { persons } from '../../server/db/schema/index.ts';
import type {
  ProposedMapping,
  SampleImportView,
  SampleMapping,
  SampleRow,
} from '../../shared/contracts/sample-import.ts';
import type { Problem } from '../../shared/contracts/errors.ts';
import { sayReason } from '../../shared/rules/sample-sentences.ts';
import { addSiteRows, type SiteRows } from './site-rows.ts';
import { type Agent, type TestServer } from './server.ts';

/** A site on Copenhagen's clock with one sample point and one soft sensor in °C, and ways to send files to it. */
export interface Laboratory extends SiteRows {
  /** Name of the site and of its sample point. */
  name: string;
  technician: Agent;
  send(content: string | Uint8Array, fileName?: string): ReturnType<Agent['post']>;
  upload(content: string | Uint8Array, fileName?: string): Promise<SampleImportView>;
  /** Uploads and says for the whole file what its columns leave open. */
  dryRun(content: string, said?: Partial<ProposedMapping>): Promise<SampleImportView>;
  commit(view: SampleImportView): ReturnType<Agent['post']>;
  /** Uploads, maps and adds. */
  add(content: string, said?: Partial<ProposedMapping>): Promise<SampleImportView>;
  samples(query?: object): Promise<{ rows: Record<string, unknown>[]; total: number }>;
}

export async function makeLaboratory(server: TestServer, name = 'Tarnby'): Promise<Laboratory> {
  const { db } = server.context;
  const email = `${name.toLowerCase()}.${Math.random()}@cupel.example`;
  const [someone] = await db.insert(persons).values({ name: 'Somebody Else', email }).returning();
  const rows = await addSiteRows(db, name, someone!.id);
  const technician = await server.signedIn({
    name: 'Tove Halbrook',
    roles: [{ siteId: rows.siteId, role: 'technician' }],
  });
  const send: Laboratory['send'] = (content, fileName = 'week-48.csv') =>
    technician
      .post(`/api/v1/sites/${rows.siteId}/sample-imports`)
      .attach('file', Buffer.from(content as string), fileName);
  const upload: Laboratory['upload'] = async (content, fileName) =>
    (await send(content, fileName).expect(200)).body as SampleImportView;
  const dryRun: Laboratory['dryRun'] = async (content, said = {}) => {
    const view = await upload(content);
    const answer = await sayMapping(technician, view, mappingOf(view, said)).expect(200);
    return answer.body as SampleImportView;
  };
  const commit: Laboratory['commit'] = (view) =>
    technician
      .post(`/api/v1/sample-imports/${view.import.id}/commit`)
      .send({ version: view.import.version, outcome: view.outcome! });
  const add: Laboratory['add'] = async (content, said) =>
    (await commit(await dryRun(content, said)).expect(200)).body as SampleImportView;
  const samples: Laboratory['samples'] = async (query = {}) =>
    (await technician.get(`/api/v1/sites/${rows.siteId}/samples`).query(query).expect(200)).body;
  return { ...rows, name, technician, send, upload, dryRun, commit, add, samples };
}

/** The proposal of a file with what a person adds to it. */
export function mappingOf(view: SampleImportView, said: Partial<ProposedMapping>): SampleMapping {
  const { proposed } = view.preview;
  const zone = proposed.zone ?? 'Europe/Copenhagen';
  return { ...proposed, zone, unit: proposed.unit ?? '°C', ...said } as SampleMapping;
}

export const sayMapping = (agent: Agent, view: SampleImportView, mapping: object) =>
  agent
    .put(`/api/v1/sample-imports/${view.import.id}/mapping`)
    .send({ mapping, version: view.import.version });

/** What a person reads beside a row. */
export const wordsOf = (row: SampleRow, zone = 'Europe/Copenhagen'): string =>
  row.reasons.map((reason) => sayReason(reason, zone)).join(' ');

export const rowAt = (view: SampleImportView, line: number): SampleRow => {
  const row = view.rows.find((shown) => shown.line === line);
  if (!row) throw new Error(`No row of line ${line} is shown.`);
  return row;
};

export const problemOf = (answer: { body: unknown }): Problem => answer.body as Problem;
