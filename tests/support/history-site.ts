import { asc, eq } from 'drizzle-orm';
import { readings, sites, tags, tagSpans } from '../../server/db/schema/index.ts';
import type {
  HistoryImport,
  HistoryLayout,
  HistoryPreview,
  HistoryProposal,
  HistoryRefusal,
} from '../../shared/contracts/history.ts';
import type { Run } from '../../shared/contracts/runs.ts';
import type { TestServer } from './server.ts';

interface View {
  import: HistoryImport;
  preview: HistoryPreview;
  refusals: HistoryRefusal[];
}

/** A site of its own with an engineer and tags, and the ways of an engineer with files of history. */
export async function historySite(server: TestServer, tagNames: string[], zone = 'Europe/Copenhagen') {
  const { db } = server.context;
  const [site] = await db
    .insert(sites)
    .values({ name: `Works ${Math.random()}`, zone })
    .returning();
  const siteId = site!.id;
  const engineer = await server.signedIn({ roles: [{ siteId, role: 'engineer' }] });
  const made = await db
    .insert(tags)
    .values(tagNames.map((name) => ({ siteId, name, unit: '°C' })))
    .returning();
  const tagIds = Object.fromEntries(made.map((tag) => [tag.name, tag.id]));

  const send = (content: string | Buffer, name = 'history.csv') =>
    engineer
      .post(`/api/v1/sites/${siteId}/history-imports`)
      .attach('file', typeof content === 'string' ? Buffer.from(content) : content, name);

  async function upload(content: string | Buffer): Promise<View> {
    return (await send(content).expect(200)).body as View;
  }

  const start = (id: number, layout: HistoryLayout, replaceExisting = false) =>
    engineer.post(`/api/v1/history-imports/${id}/start`).send({ layout, replaceExisting });

  const view = async (id: number): Promise<View> =>
    (await engineer.get(`/api/v1/history-imports/${id}`).expect(200)).body as View;

  const run = async (id: number): Promise<Run> =>
    (await engineer.get(`/api/v1/runs/${id}`).expect(200)).body as Run;

  /** Uploads, takes what is proposed (changed where said), runs all jobs and tells what came of it. */
  async function add(
    content: string | Buffer,
    change: Partial<HistoryProposal> & { replaceExisting?: boolean } = {},
  ): Promise<View> {
    const { replaceExisting = false, ...layout } = change;
    const { import: row, preview } = await upload(content);
    await start(row.id, layoutOf({ ...preview.proposed, ...layout }), replaceExisting).expect(200);
    await server.drainJobs();
    return view(row.id);
  }

  /** What is stored of a tag, oldest first. */
  async function stored(tagName: string) {
    const rows = await db
      .select({ at: readings.at, value: readings.value, quality: readings.quality })
      .from(readings)
      .where(eq(readings.tagId, tagIds[tagName]!))
      .orderBy(asc(readings.at));
    return rows.map((row) => [row.at.toISOString(), row.value, row.quality] as const);
  }

  const span = async (tagName: string) =>
    (await db.select().from(tagSpans).where(eq(tagSpans.tagId, tagIds[tagName]!)))[0] ?? null;

  return { siteId, engineer, tagIds, send, upload, start, view, run, add, stored, span };
}

export type HistorySite = Awaited<ReturnType<typeof historySite>>;

/** A proposal whose every open question is answered, as the layout to start with. */
export function layoutOf(proposed: HistoryProposal): HistoryLayout {
  const { shape, columns, tagColumn, valueColumn, qualityColumn, timeColumn, ...rest } = proposed;
  if (timeColumn === null) throw new Error('No column of times was found.');
  if (shape === 'wide') return { shape, ...rest, timeColumn, columns };
  if (tagColumn === null || valueColumn === null) throw new Error('A column is open.');
  return { shape, ...rest, timeColumn, tagColumn, valueColumn, qualityColumn };
}
