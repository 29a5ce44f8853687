import { createHash } from 'node:crypto';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { DayOrder, EventFile, EventRow } from '../../../shared/contracts/events.ts';
import { countEvents, type DecidedEvent, decideEvents } from '../../../shared/rules/event-outcomes.ts';
import { type EventFileProblem, readEvents } from '../../../shared/rules/event-row.ts';
import { sayEventCounts, sayEventFileProblem } from '../../../shared/rules/event-sentences.ts';
import { decodeFile } from '../../../shared/rules/sample-text.ts';
import type { Context } from '../../context.ts';
import type { Queryable } from '../../db/client.ts';
import type { SiteRow } from '../../http/rows.ts';
import type { StoredUpload } from '../../http/upload.ts';
import { recordAudit } from '../audit/service.ts';
import { dropFile, readWholeFile } from '../files/service.ts';
import type { By } from '../register/service.ts';
import { listUnits } from '../sites/repo.ts';
import { listSensors, standingEvents } from './repo.ts';
import { oneAtATime, recordEvents } from './service.ts';

interface Asked {
  dayOrder?: DayOrder | undefined;
  outcome?: string | undefined;
}

const shownOfEach = 200;
const shownOrder: EventRow['outcome'][] = ['refused', 'added', 'skipped'];

/**
 * Shows what would become of each row of a file; with the outcome that was seen, adds what is to be added, all or none.
 * The file itself is not kept: the audit trail holds its name and hash, and each row is an event.
 */
export async function takeFile(
  context: Context,
  by: By,
  site: SiteRow,
  file: StoredUpload,
  asked: Asked,
): Promise<EventFile> {
  const bytes = await readWholeFile(context.db, { siteId: site.id, fileId: file.id });
  await dropFile(context.db, file);
  if (asked.outcome === undefined) {
    return (await decideFile(context.db, site, { name: file.name, bytes }, asked, context.clock())).view;
  }
  return context.db.transaction(async (tx) => {
    await oneAtATime(tx, site.id);
    const now = context.clock();
    const { view, rows } = await decideFile(tx, site, { name: file.name, bytes }, asked, now);
    refuseOther(view, asked.outcome!);
    const added = rows.flatMap(({ read: { event }, fresh }) =>
      event && fresh.length > 0 ? [{ subject: event.subject, fresh, note: event.note }] : [],
    );
    await recordEvents(tx, by, site.id, now, added);
    await recordAudit(tx, {
      at: now,
      siteId: site.id,
      ...by,
      action: 'commit',
      entity: 'event-file',
      entityId: file.sha256.slice(0, 16),
      entityName: file.name,
      after: { ...view.counts, sha256: file.sha256 },
    });
    return { ...view, committed: true };
  });
}

/** Only what was seen is added: an outcome that changed since is shown instead. */
function refuseOther(view: EventFile, seen: string): void {
  if (view.outcome !== seen) {
    const message = `What becomes of these rows has changed since it was shown. Now ${sayEventCounts(view.counts, false)} Look at them again.`;
    throw new AppError('stale', message, { current: { ...view } });
  }
  if (view.counts.added === 0) {
    throw new AppError('conflict', `There is nothing to add. ${sayEventCounts(view.counts, false)}`);
  }
}

async function decideFile(
  db: Queryable,
  site: SiteRow,
  { name, bytes }: { name: string; bytes: Buffer },
  { dayOrder = undefined }: Asked,
  now: Date,
): Promise<{ view: EventFile; rows: DecidedEvent[] }> {
  const decoded = decodeFile(bytes);
  if (!decoded.ok) throw unreadable(name, decoded.problem);
  const units = (await listUnits(db, site.id)).filter(({ archivedAt }) => archivedAt === null);
  const registry = { zone: site.zone, units, sensors: await listSensors(db, site.id) };
  const table = readEvents(decoded.text, registry, dayOrder ?? null);
  if (!table.ok) throw unreadable(name, table.problem);
  const rows = decideEvents(table.rows, await standingEvents(db, site.id), site, now.getTime());
  const view: EventFile = {
    fileName: name,
    undecided: table.undecided,
    counts: countEvents(rows),
    rows: shownOrder.flatMap((outcome) => shown(rows, outcome)),
    outcome: fingerprint(rows),
    committed: false,
  };
  return { view, rows };
}

const shown = (rows: readonly DecidedEvent[], outcome: EventRow['outcome']): EventRow[] =>
  rows
    .filter((row) => row.outcome === outcome)
    .slice(0, shownOfEach)
    .map(({ read: { line, written }, says }) => ({ line, outcome, says, written }));

function unreadable(fileName: string, problem: EventFileProblem): AppError {
  const message = sayEventFileProblem(problem);
  return new AppError('unreadable', `${fileName}: ${message}`, { fields: [{ path: 'file', message }] });
}

function fingerprint(rows: readonly DecidedEvent[]): string {
  const lines = rows.map(({ read, outcome, says }) => `${read.line} ${outcome} ${says} ${read.written.note}`);
  return createHash('sha256').update(lines.join('\n')).digest('hex').slice(0, 32);
}
