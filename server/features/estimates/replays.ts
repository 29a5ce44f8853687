import { and, desc, eq, getTableColumns } from 'drizzle-orm';
import type { z } from 'zod';
import { AppError } from '../../../shared/contracts/errors.ts';
import type { judging, Replay } from '../../../shared/contracts/judging.ts';
import type { Model } from '../../../shared/contracts/models.ts';
import type { Context } from '../../context.ts';
import type { Db, Queryable } from '../../db/client.ts';
import { methods, persons, replays, revisions, softSensors } from '../../db/schema/index.ts';
import type { Actor, Origin } from '../../http/request.ts';
import type { Permitted } from '../../http/rows.ts';
import { addJob } from '../../jobs/queue.ts';
import { recordAudit } from '../audit/service.ts';
import { addRun } from '../runs/repo.ts';
import { type SensorRow, approvedRevisions, findDraft } from './repo.ts';

type StartBody = z.output<(typeof judging)['replays.start']['body']>;
type ReplayRow = typeof replays.$inferSelect;

const newest = 50;

/** Queues a replay of the draft or of the revision in force over a period; the run tells how far it is. */
export async function startReplay(
  context: Context,
  by: { actor: Actor; origin: Origin },
  sensor: Permitted<SensorRow>,
  body: StartBody,
): Promise<Replay> {
  refuseEmptyPeriod(body);
  const id = await context.db.transaction(async (tx) => {
    const chosen = await chooseModel(tx, sensor, body.model);
    const createdAt = context.clock();
    const [replay] = await tx
      .insert(replays)
      .values({
        siteId: sensor.siteId,
        softSensorId: sensor.id,
        ...chosen,
        fromAt: new Date(body.from),
        toAt: new Date(body.to),
        judgedFrom: new Date(body.judgedFrom),
        updateFactor: body.updateFactor,
        createdBy: by.actor.id,
        createdAt,
      })
      .returning({ id: replays.id });
    const run = await addRun(tx, {
      siteId: sensor.siteId,
      kind: 'replay',
      subjectId: replay!.id,
      createdBy: by.actor.id,
      createdAt,
    });
    await tx.update(replays).set({ runId: run.id }).where(eq(replays.id, replay!.id));
    await addJob(
      tx,
      'replay',
      { siteId: sensor.siteId, replayId: replay!.id, runId: run.id },
      { maxAttempts: 3 },
    );
    await recordAudit(tx, {
      at: createdAt,
      siteId: sensor.siteId,
      ...by,
      action: 'start',
      entity: 'replay',
      entityId: replay!.id,
      entityName: sensor.tagName,
      after: { ...body },
    });
    return replay!.id;
  });
  return (await listReplays(context.db, sensor, id))[0]!;
}

function refuseEmptyPeriod(body: StartBody): void {
  const say = (path: string, message: string) => {
    throw new AppError('invalid-input', message, { fields: [{ path, message }] });
  };
  if (Date.parse(body.from) >= Date.parse(body.to)) say('to', 'The end must be after the beginning.');
  if (Date.parse(body.judgedFrom) >= Date.parse(body.to))
    say('judgedFrom', 'Judging must begin before the end.');
}

async function chooseModel(tx: Queryable, sensor: SensorRow, wanted: 'draft' | 'in-force') {
  if (wanted === 'draft') {
    const draft = await findDraft(tx, sensor.siteId, sensor.id);
    if (draft) return { draftId: draft.id, revisionId: null, model: draft.model };
    throw new AppError('conflict', 'There is no draft to replay. Begin one under Model.');
  }
  const revision = (await approvedRevisions(tx, sensor.siteId, sensor.id)).at(-1);
  if (revision) return { draftId: null, revisionId: revision.id, model: revision.model };
  throw new AppError('conflict', 'No revision is in force yet. Replay the draft, or have it approved first.');
}

const columns = {
  ...getTableColumns(replays),
  revisionNumber: revisions.number,
  createdByName: persons.name,
  reproducibility: methods.reproducibility,
};

function selectReplays(db: Queryable) {
  return db
    .select(columns)
    .from(replays)
    .innerJoin(persons, eq(persons.id, replays.createdBy))
    .innerJoin(
      softSensors,
      and(eq(softSensors.siteId, replays.siteId), eq(softSensors.id, replays.softSensorId)),
    )
    .leftJoin(methods, and(eq(methods.siteId, softSensors.siteId), eq(methods.id, softSensors.methodId)))
    .leftJoin(revisions, and(eq(revisions.siteId, replays.siteId), eq(revisions.id, replays.revisionId)))
    .$dynamic();
}

/** Replays of a soft sensor, newest first; figures without the points, which only the single replay carries. */
export async function listReplays(db: Queryable, sensor: SensorRow, onlyId?: number): Promise<Replay[]> {
  const rows = await selectReplays(db)
    .where(
      and(
        eq(replays.siteId, sensor.siteId),
        eq(replays.softSensorId, sensor.id),
        onlyId === undefined ? undefined : eq(replays.id, onlyId),
      ),
    )
    .orderBy(desc(replays.createdAt), desc(replays.id))
    .limit(newest);
  return rows.map((row) => toReplay(row, false));
}

export async function getReplay(db: Db, replay: Permitted<ReplayRow>): Promise<Replay> {
  const [row] = await selectReplays(db).where(
    and(eq(replays.siteId, replay.siteId), eq(replays.id, replay.id)),
  );
  return toReplay(row!, true);
}

type ListedReplay = ReplayRow & {
  model: Model;
  revisionNumber: number | null;
  createdByName: string;
  reproducibility: number | null;
};

function toReplay(row: ListedReplay, whole: boolean): Replay {
  const { figures } = row;
  return {
    id: row.id,
    softSensorId: row.softSensorId,
    revisionNumber: row.revisionNumber,
    draft: row.draftId !== null,
    from: row.fromAt.toISOString(),
    to: row.toAt.toISOString(),
    judgedFrom: row.judgedFrom.toISOString(),
    updateFactor: row.updateFactor,
    runId: row.runId,
    createdBy: row.createdByName,
    createdAt: row.createdAt.toISOString(),
    reproducibility: row.reproducibility,
    figures:
      figures && !whole
        ? {
            ...figures,
            errors: [],
            chart: { at: [], value: [], low: [], high: [] },
            judgement: { ...figures.judgement, ewma: null },
          }
        : figures,
  };
}
