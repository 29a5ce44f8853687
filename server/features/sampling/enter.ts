import { and, eq, sql } from 'drizzle-orm';
import type { Sample } from '../../../shared/contracts/samples.ts';
import type { EnteredSample } from '../../../shared/contracts/sampling.ts';
import type { Context } from '../../context.ts';
import type { Queryable, Tx } from '../../db/client.ts';
import { samples } from '../../db/schema/index.ts';
import type { SiteRow } from '../../http/rows.ts';
import { toWire } from '../../http/wire.ts';
import { recordAudit } from '../audit/service.ts';
import { samplesChanged } from '../judging/changed.ts';
import type { By } from '../register/service.ts';
import { listSamples } from '../samples/repo.ts';
import { readEntry } from './entry.ts';
import { farTest, sayHeld } from './far.ts';

export interface Entered {
  sample: Sample;
  /** Why it is held and does not count yet. */
  held: string | null;
  again: boolean;
}

/** Adds one sample typed by hand. A key that was sent before gives the sample that it made, also when both come at once. */
export async function enterSample(
  context: Context,
  by: By,
  site: SiteRow,
  body: EnteredSample,
): Promise<Entered> {
  return context.db.transaction(async (tx) => {
    // One at a time at a site: the same key at once adds once, and no two get the same number.
    await tx.execute(sql`select pg_advisory_xact_lock(hashtext('sample-imports'), ${site.id})`);
    const before = await findByKey(tx, site.id, body.entryKey);
    if (before !== null) return { ...(await entered(tx, site, before)), again: true };
    const now = context.clock();
    const made = await addEntry(tx, by, site, body, now);
    await recordAudit(tx, {
      at: now,
      siteId: site.id,
      ...by,
      action: 'add',
      entity: 'sample',
      entityId: made.id,
      entityName: made.sampleNumber,
      before: null,
      after: {
        value: made.asWritten,
        unit: made.statedUnit ?? made.unit,
        takenAt: made.takenAt,
        held: made.heldSince !== null,
      },
      reason: body.note,
    });
    await samplesChanged(tx, { siteId: site.id, samplePointIds: [made.samplePointId] });
    return { ...(await entered(tx, site, made.id)), again: false };
  });
}

async function addEntry(tx: Tx, by: By, site: SiteRow, body: EnteredSample, now: Date) {
  const row = await readEntry(tx, site, body, now);
  const far = row.qualifier === null && (await farTest(tx, site.id, row))?.isFar(row.value) === true;
  const flags = {
    censored: row.qualifier !== null,
    converted: row.statedUnit !== null,
    'far-from-last': far,
  };
  const [made] = await tx
    .insert(samples)
    .values({
      ...row,
      reportedAt: now,
      enteredAt: now,
      enteredBy: by.actor.id,
      entryKey: body.entryKey,
      flags: Object.entries(flags).flatMap(([flag, is]) => (is ? [flag] : [])),
      heldSince: far ? now : null,
    })
    .returning();
  return made!;
}

async function findByKey(db: Queryable, siteId: number, entryKey: string): Promise<number | null> {
  const own = and(eq(samples.siteId, siteId), eq(samples.entryKey, entryKey));
  const [found] = await db.select({ id: samples.id }).from(samples).where(own);
  return found?.id ?? null;
}

async function entered(db: Queryable, site: SiteRow, id: number): Promise<Omit<Entered, 'again'>> {
  const { rows } = await listSamples(db, site.id, { page: 1, perPage: 1, id });
  return { sample: toWire(rows[0]!), held: await sayHeld(db, site, rows[0]!) };
}
