import { and, eq } from 'drizzle-orm';
import type { CalibrationRecord } from '../../../shared/contracts/calibrations.ts';
import { biasWithInterval } from '../../../shared/numerics/bias.ts';
import { biasWindow } from '../../../shared/rules/health.ts';
import type { Queryable } from '../../db/client.ts';
import { sites, units } from '../../db/schema/index.ts';
import { type SensorRow, findSensor, methodOf } from '../estimates/repo.ts';
import { toPairedError } from '../judging/figures.ts';
import { standingPairs } from '../judging/repo.ts';
import { namesOf } from '../people/repo.ts';
import { currentOwnership } from '../register/repo.ts';
import { type CalibrationRow, correctionSteps, getCalibration, pairsOf } from './repo.ts';

/** A calibration with the samples it was judged on as they stood then, and how it has done since. */
export async function readRecord(db: Queryable, row: CalibrationRow, now: Date): Promise<CalibrationRecord> {
  const sensor = (await findSensor(db, row.siteId, row.softSensorId))!;
  const calibration = await getCalibration(db, row);
  const method = await methodOf(db, sensor);
  const judged = await pairsOf(db, row);
  const before = [{ fromMs: -Infinity, slope: row.slopeBefore, offset: row.offsetBefore }];
  const ownership = await currentOwnership(db, row.siteId, row.softSensorId);
  const people = [row.ownerId, ownership?.ownerId, ownership?.approverId].filter(
    (id) => typeof id === 'number',
  );
  const names = await namesOf(db, people);
  const person = (id: number | null | undefined) => (id ? { id, name: names.get(id) ?? '' } : null);
  return {
    ...calibration,
    ...(await placeOf(db, sensor)),
    tagName: sensor.tagName,
    name: sensor.name,
    unit: sensor.unit,
    decimals: sensor.decimals,
    methodName: method?.name ?? null,
    reproducibility: method?.reproducibility ?? null,
    errors: judged.map(({ pair, sampleNumber }) => toPairedError(sensor, pair, sampleNumber, before)),
    since: await sinceInForce(
      db,
      sensor,
      row,
      calibration.effectiveTo ? new Date(Date.parse(calibration.effectiveTo) - 1) : now,
    ),
    revisedSamples: judged
      .filter(({ pair }) => pair.supersededAt !== null)
      .map(({ sampleNumber }) => sampleNumber),
    ownerThen: person(row.ownerId),
    ownerNow: person(ownership?.ownerId),
    approver: person(ownership?.approverId),
  };
}

/** As left, on samples that came after: corrected errors while it was in force. */
async function sinceInForce(
  db: Queryable,
  sensor: SensorRow,
  row: CalibrationRow,
  until: Date,
): Promise<CalibrationRecord['since']> {
  if (row.effectiveFrom === null) return null;
  const steps = await correctionSteps(db, sensor.siteId, sensor.id);
  const rows = await standingPairs(db, sensor, { from: row.effectiveFrom, to: until });
  const errors = rows
    .filter(({ pair }) => pair.notCounted === null)
    .map(({ pair, sampleNumber }) => toPairedError(sensor, pair, sampleNumber, steps).corrected!)
    .slice(-biasWindow);
  const found = biasWithInterval(errors);
  return found.ok ? found : { ok: false, reason: found.reason, n: errors.length };
}

async function placeOf(db: Queryable, sensor: SensorRow) {
  const [place] = await db
    .select({ siteName: sites.name, siteZone: sites.zone, unitName: units.name })
    .from(sites)
    .innerJoin(units, and(eq(units.siteId, sites.id), eq(units.id, sensor.unitId)))
    .where(eq(sites.id, sensor.siteId));
  return place!;
}
