import { sql } from 'drizzle-orm';
import type { Db } from '../../server/db/client.ts';
import {
  areas,
  auditEntries,
  checkResults,
  checkStandards,
  drafts,
  historyImports,
  importProfiles,
  lifeStates,
  methods,
  ownerships,
  readings,
  replays,
  revisions,
  runs,
  sampleImports,
  samplePoints,
  sampleRequests,
  samples,
  sites,
  softSensors,
  softSensorStatus,
  tags,
  tagSpans,
  units,
} from '../../server/db/schema/index.ts';
import { addRecordRows } from './record-rows.ts';
import { addFile } from './stored-file.ts';
import type { Model } from '../../shared/contracts/models.ts';
import type { ProfileMapping } from '../../shared/contracts/sample-profiles.ts';

const at = new Date('2026-11-01T06:00:00Z');
const hour = new Date('2026-11-01T07:00:00Z');

/** Ids of one row of every kind at a site, by the path parameter that names it. */
export type SiteRows = Record<
  | 'siteId'
  | 'areaId'
  | 'unitId'
  | 'tagId'
  | 'methodId'
  | 'samplePointId'
  | 'softSensorId'
  | 'revisionId'
  | 'calibrationId'
  | 'eventId'
  | 'dutyId'
  | 'handoverId'
  | 'replayId'
  | 'sampleImportId'
  | 'importProfileId'
  | 'sampleId'
  | 'sampleRequestId'
  | 'checkStandardId'
  | 'checkResultId'
  | 'historyImportId'
  | 'runId',
  number
>;

/** Makes a site with one row of every kind; `mark` stands in each text, so that a row can be told by its words. */
export async function addSiteRows(db: Db, mark: string, personId: number): Promise<SiteRows> {
  const plant = await addPlant(db, mark);
  const laboratory = await addLaboratory(db, mark, plant, personId);
  const sensor = await addSensor(db, mark, { ...plant, ...laboratory }, personId);
  const imports = await addHistory(db, mark, plant, personId);
  const records = await addRecordRows(db, mark, { ...plant, ...sensor }, personId, at);
  await db.insert(auditEntries).values({
    at,
    siteId: plant.siteId,
    personId,
    personName: mark,
    fromAddress: '',
    action: 'add',
    entity: 'site',
    entityId: String(plant.siteId),
    entityName: mark,
    requestId: 'fixture',
  });
  return { ...plant, ...laboratory, ...sensor, ...imports, ...records };
}

const only = async <T>(rows: Promise<T[]>): Promise<T> => (await rows)[0]!;

async function addPlant(db: Db, mark: string) {
  const site = await only(
    db.insert(sites).values({ name: mark, zone: 'Europe/Copenhagen' }).returning({ id: sites.id }),
  );
  const siteId = site.id;
  const area = await only(db.insert(areas).values({ siteId, name: mark }).returning({ id: areas.id }));
  const unit = await only(
    db.insert(units).values({ siteId, areaId: area.id, name: mark }).returning({ id: units.id }),
  );
  const tag = await only(
    db
      .insert(tags)
      .values({ siteId, unitId: unit.id, name: `${mark} TI`, unit: '°C' })
      .returning({ id: tags.id }),
  );
  await db.execute(sql`select ensure_month_partition('2026-11-01'::date)`);
  await db.insert(readings).values([
    { siteId, tagId: tag.id, at, value: 300 },
    { siteId, tagId: tag.id, at: hour, value: 302 },
  ]);
  await db
    .insert(tagSpans)
    .values({ siteId, tagId: tag.id, firstAt: at, lastAt: hour, lastValue: 302, readings: 2 });
  return { siteId, areaId: area.id, unitId: unit.id, tagId: tag.id };
}
type Plant = Awaited<ReturnType<typeof addPlant>>;

async function addLaboratory(db: Db, mark: string, { siteId, unitId }: Plant, personId: number) {
  const method = await only(
    db.insert(methods).values({ siteId, name: mark, unit: '°C' }).returning({ id: methods.id }),
  );
  const point = await only(
    db.insert(samplePoints).values({ siteId, unitId, name: mark }).returning({ id: samplePoints.id }),
  );
  const fileId = await addFile(
    db,
    siteId,
    mark,
    'sample;taken;value\r\nS-1;2026-11-01T06:30:00Z;301\r\n',
    personId,
  );
  const sampleImport = await only(
    db
      .insert(sampleImports)
      .values({ siteId, fileId, fileName: mark, sha256: mark, createdBy: personId, createdAt: at })
      .returning({ id: sampleImports.id }),
  );
  const importProfile = await only(
    db
      .insert(importProfiles)
      .values({
        siteId,
        name: mark,
        signature: mark,
        mapping: {} as ProfileMapping,
        usedAt: at,
        createdBy: personId,
        createdAt: at,
      })
      .returning({ id: importProfiles.id }),
  );
  const sample = await only(
    db
      .insert(samples)
      .values({
        siteId,
        samplePointId: point.id,
        sampleNumber: mark,
        takenAt: at,
        reportedAt: hour,
        value: 301,
        unit: '°C',
        asWritten: '301',
        enteredBy: personId,
        enteredAt: hour,
      })
      .returning({ id: samples.id }),
  );
  return {
    methodId: method.id,
    samplePointId: point.id,
    sampleImportId: sampleImport.id,
    importProfileId: importProfile.id,
    sampleId: sample.id,
    ...(await addChecks(db, mark, siteId, method.id, personId)),
  };
}

async function addChecks(db: Db, mark: string, siteId: number, methodId: number, personId: number) {
  const standard = await only(
    db
      .insert(checkStandards)
      .values({ siteId, methodId, name: mark, acceptedValue: 300 })
      .returning({ id: checkStandards.id }),
  );
  const result = await only(
    db
      .insert(checkResults)
      .values({
        siteId,
        standardId: standard.id,
        measuredAt: at,
        analyst: mark,
        values: [300, 301],
        recordedBy: personId,
        recordedAt: hour,
      })
      .returning({ id: checkResults.id }),
  );
  return { checkStandardId: standard.id, checkResultId: result.id };
}
type Laboratory = Awaited<ReturnType<typeof addLaboratory>>;

async function addSensor(db: Db, mark: string, rows: Plant & Laboratory, personId: number) {
  const { siteId } = rows;
  const model: Model = {
    form: 'regression',
    stepMs: 60_000,
    holdLimitMs: 600_000,
    intercept: 2,
    terms: [{ tagId: rows.tagId, coefficient: 1 }],
    residualSd: 2,
  };
  const tag = await only(
    db
      .insert(tags)
      .values({ siteId, unitId: rows.unitId, name: `${mark} TY`, unit: '°C', kind: 'estimate' })
      .returning({ id: tags.id }),
  );
  const sensor = await only(
    db
      .insert(softSensors)
      .values(sheetOf(mark, rows, tag.id, personId))
      .returning({ id: softSensors.id }),
  );
  const key = { siteId, softSensorId: sensor.id };
  const from = { effectiveFrom: at, recordedBy: personId };
  await db.insert(ownerships).values({ ...key, ...from, ownerId: personId });
  await db.insert(lifeStates).values({ ...key, ...from, state: 'in-service' });
  await db.insert(drafts).values({ ...key, model, updatedAt: at, updatedBy: personId });
  const revision = await only(
    db
      .insert(revisions)
      .values({ ...key, number: 1, model, reason: mark, proposedAt: at, proposedBy: personId })
      .returning({ id: revisions.id }),
  );
  await db.insert(softSensorStatus).values({
    ...key,
    health: 'unproven',
    severity: 1,
    reasons: [{ code: 'no-reference', health: 'unproven', figures: {} }],
    healthSince: at,
    judgedAt: hour,
  });
  const run = await only(
    db.insert(runs).values({ siteId, kind: 'replay', subjectId: sensor.id }).returning({ id: runs.id }),
  );
  const replay = await only(
    db
      .insert(replays)
      .values({
        ...key,
        revisionId: revision.id,
        model,
        fromAt: at,
        toAt: hour,
        judgedFrom: at,
        updateFactor: 0.2,
        runId: run.id,
        createdBy: personId,
        createdAt: hour,
      })
      .returning({ id: replays.id }),
  );
  const sampleRequest = await only(
    db
      .insert(sampleRequests)
      .values({
        ...key,
        samplePointId: rows.samplePointId,
        count: 3,
        fromAt: at,
        untilAt: new Date('2099-01-01T00:00:00Z'),
        reason: mark,
        askedBy: personId,
        askedAt: at,
      })
      .returning({ id: sampleRequests.id }),
  );
  return {
    softSensorId: sensor.id,
    revisionId: revision.id,
    replayId: replay.id,
    runId: run.id,
    sampleRequestId: sampleRequest.id,
  };
}

function sheetOf(mark: string, rows: Plant & Laboratory, estimateTagId: number, personId: number) {
  const values: typeof softSensors.$inferInsert = {
    siteId: rows.siteId,
    unitId: rows.unitId,
    tagName: `${mark} TY`,
    name: mark,
    quantity: 'temperature',
    unit: '°C',
    decimals: 0,
    importanceClass: 'A',
    estimateTagId,
    samplePointId: rows.samplePointId,
    methodId: rows.methodId,
    promisedReferenceMs: 86_400_000,
    allowedErrorAbsolute: 10,
    historyEveryMs: 60_000,
    recalibrationInterval: {
      every: 3,
      unit: 'months' as const,
      counted: 'last-done' as const,
      anchorOn: null,
    },
    reviewInterval: { every: 12, unit: 'months' as const, counted: 'last-done' as const, anchorOn: null },
    createdAt: at,
    createdBy: personId,
  };
  return values;
}

async function addHistory(db: Db, mark: string, { siteId }: Plant, personId: number) {
  const text = `time,${mark} TI\r\n2026-11-01T08:00:00Z,303\r\n`;
  const fileId = await addFile(db, siteId, mark, text, personId);
  const row = await only(
    db
      .insert(historyImports)
      .values({
        siteId,
        fileId,
        fileName: mark,
        fileSize: text.length,
        sha256: mark,
        createdBy: personId,
        createdAt: at,
      })
      .returning({ id: historyImports.id }),
  );
  return { historyImportId: row.id };
}
