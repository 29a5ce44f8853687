import { sql } from 'drizzle-orm';
import type { SampleImportView } from '../../../shared/contracts/sample-import.ts';
import { AppError } from '../../../shared/contracts/errors.ts';
import { countOutcomes, isToAdd } from '../../../shared/rules/sample-outcomes.ts';
import { isFlag, isHold } from '../../../shared/rules/sample-row.ts';
import { sayCounts } from '../../../shared/rules/sample-sentences.ts';
import type { Context } from '../../context.ts';
import type { Tx } from '../../db/client.ts';
import { type Permitted, lockRow } from '../../http/rows.ts';
import { samplesChanged } from '../judging/changed.ts';
import { whatRestsOn } from '../laboratory/rests.ts';
import { viewImport, viewOf } from './import-view.ts';
import { type By, note, refuseMoved, refuseStale } from './imports.ts';
import { type ImportRow, setImport } from './imports-repo.ts';
import { remember } from './profiles.ts';
import { type DryRun, readText, refuseForeign, runDry } from './reading.ts';
import { addSamples, withdrawSamples } from './repo.ts';

/**
 * Adds the samples of a file, all or none. What becomes of each row is decided again here, one commit of a site after
 * the other: the dry run may be hours old, and another file may have brought the same samples meanwhile. A file that was
 * added before is added to by what can go in since, as after a mend.
 */
export async function commitImport(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
  body: { version: number; outcome: string },
): Promise<SampleImportView> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'sampleImport', row);
    const now = context.clock();
    if (locked.state === 'undone') await refuseMoved(tx, locked, body.version, now);
    await refuseStale(tx, locked, body.version, now);
    if (!locked.mapping) throw new AppError('conflict', 'Say what each column holds first.');
    await refuseForeign(tx, row.siteId, locked.mapping);
    await tx.execute(sql`select pg_advisory_xact_lock(hashtext('sample-imports'), ${row.siteId})`);
    const file = await readText(tx, locked);
    const dry = await runDry(tx, locked, file, locked.mapping, now);
    await refuseOther(tx, locked, dry, body.outcome, now);
    await add(tx, by, locked, dry, now);
    const counts = countOutcomes(dry.rows);
    const after = await setImport(tx, row, {
      state: 'committed',
      committedAt: now,
      counts,
      profileId: await remember(tx, by, locked, dry.header, now),
      unknownPoints: unknownPoints(dry.rows),
      version: locked.version + 1,
    });
    await note(context, tx, by, 'commit', after, { mapping: locked.mapping, counts });
    const rows = dry.rows.map((one) => (isToAdd(one) ? { ...one, stored: true } : one));
    return viewOf(tx, after, file, { ...dry, rows });
  });
}

/** Only what was seen is added: an outcome that changed since is shown instead. */
async function refuseOther(tx: Tx, row: ImportRow, dry: DryRun, seen: string, now: Date): Promise<void> {
  const counts = countOutcomes(dry.rows);
  if (seen !== dry.outcome) {
    const message = `What becomes of these rows has changed since it was shown. Now ${sayCounts(counts, 'will')} Look at them again.`;
    throw new AppError('stale', message, { current: { ...(await viewImport(tx, row, now)) } });
  }
  if (!dry.rows.some(isToAdd)) {
    throw new AppError('conflict', `There is nothing to add. ${sayCounts(counts, 'will')}`);
  }
}

async function add(tx: Tx, by: By, row: ImportRow, dry: DryRun, now: Date): Promise<void> {
  const { siteId, id: importId } = row;
  const rows = dry.rows.filter(isToAdd).map(({ sample, outcome, reasons, row: { line } }) => {
    const held = outcome === 'held';
    const flags = reasons.map(({ code }) => code).filter((code) => isFlag(code) || isHold(code));
    return { sample: sample!, line, held, flags };
  });
  const { methodId } = row.mapping!;
  await addSamples(tx, { siteId, methodId, importId, enteredBy: by.actor.id, enteredAt: now, rows });
  const samplePointIds = [...new Set(rows.map(({ sample }) => sample.samplePointId))];
  await samplesChanged(tx, { siteId, samplePointIds });
}

/** Names of points that the site does not know, with their rows: they wait until somebody says what they are. */
function unknownPoints(rows: DryRun['rows']): Record<string, number> {
  const waiting: Record<string, number> = {};
  for (const { outcome, reasons } of rows) {
    const unknown = reasons.find(({ code }) => code === 'unknown-point');
    if (!unknown || outcome !== 'refused') continue;
    const name = String(unknown.figures.point);
    waiting[name] = (waiting[name] ?? 0) + 1;
  }
  return waiting;
}

/** What a decision was made on, or a correction took the place of, is not taken away underneath. */
async function refuseRelied(tx: Tx, row: ImportRow): Promise<void> {
  const rests = await whatRestsOn(tx, row.siteId, row.id);
  if (rests) throw new AppError('conflict', rests);
}

/** Takes the samples of a file out again. They stay in the database, withdrawn; the estimates are judged without them. */
export async function undoImport(
  context: Context,
  by: By,
  row: Permitted<ImportRow>,
): Promise<SampleImportView> {
  return context.db.transaction(async (tx) => {
    const locked = await lockRow(tx, 'sampleImport', row);
    if (locked.state !== 'committed') {
      const message =
        locked.state === 'undone'
          ? 'The samples of this file were taken out already.'
          : 'The samples of this file have not been added, so there is nothing to undo.';
      throw new AppError('conflict', message);
    }
    await refuseRelied(tx, row);
    const now = context.clock();
    const samplePointIds = await withdrawSamples(tx, row.siteId, row.id, now);
    await samplesChanged(tx, { siteId: row.siteId, samplePointIds });
    const after = await setImport(tx, row, {
      state: 'undone',
      undoneAt: now,
      undoneBy: by.actor.id,
      version: locked.version + 1,
    });
    await note(context, tx, by, 'undo', after, { counts: after.counts });
    return viewImport(tx, after, now);
  });
}
