import { and, eq, inArray } from 'drizzle-orm';
import type { Context } from '../../server/context.ts';
import { methods, samplePoints, samples, softSensors } from '../../server/db/schema/index.ts';
import { samplesChanged } from '../../server/features/judging/changed.ts';
import type { LaboratoryResult } from '../simulation/laboratory.ts';
import type { DemoSensor, DemoUnit } from '../simulation/unit.ts';

const rowsAtOnce = 1000;

/** Adds the sample points and methods of a unit's soft sensors; returns the ids by tag name of the soft sensor. */
export async function addLaboratory(context: Context, siteId: number, unitId: number, unit: DemoUnit) {
  const ids = new Map<string, { samplePointId: number; methodId: number }>();
  for (const { sampling, sheet } of unit.sensors) {
    const [point] = await context.db
      .insert(samplePoints)
      .values({ siteId, unitId, name: sampling.point })
      .returning();
    const { name, repeatability, reproducibility } = sampling.method;
    const [known] = await context.db
      .select()
      .from(methods)
      .where(and(eq(methods.siteId, siteId), eq(methods.name, name)));
    const values = {
      siteId,
      name,
      repeatability,
      reproducibility,
      quantity: sheet.quantity,
      unit: sheet.unit,
    };
    const [method] = known ? [known] : await context.db.insert(methods).values(values).returning();
    ids.set(sheet.tagName, { samplePointId: point!.id, methodId: method!.id });
  }
  return ids;
}

/**
 * Adds the results of a soft sensor that are not there yet, by sample number, at the point where it has its samples
 * taken. Returns how many.
 */
export async function addSamples(
  context: Context,
  siteId: number,
  enteredBy: number,
  sensor: DemoSensor,
  results: readonly LaboratoryResult[],
): Promise<number> {
  const [asked] = await context.db
    .select()
    .from(softSensors)
    .where(and(eq(softSensors.siteId, siteId), eq(softSensors.tagName, sensor.sheet.tagName)));
  const samplePointId = asked?.samplePointId;
  if (!samplePointId) return 0;
  const numbered = new Map(results.map((result) => [numberOf(sensor, result), result]));
  const known = await context.db
    .select({ number: samples.sampleNumber })
    .from(samples)
    .where(
      and(
        eq(samples.siteId, siteId),
        eq(samples.samplePointId, samplePointId),
        inArray(samples.sampleNumber, [...numbered.keys()]),
      ),
    );
  for (const { number } of known) numbered.delete(number);
  const rows = [...numbered].map(([sampleNumber, { takenMs, reportedMs, ...result }]) => ({
    ...result,
    siteId,
    samplePointId,
    methodId: asked.methodId,
    sampleNumber,
    takenAt: new Date(takenMs),
    reportedAt: new Date(reportedMs),
    unit: sensor.sheet.unit,
    enteredBy,
    enteredAt: new Date(reportedMs),
  }));
  if (rows.length === 0) return 0;
  await context.db.transaction(async (tx) => {
    for (let from = 0; from < rows.length; from += rowsAtOnce)
      await tx.insert(samples).values(rows.slice(from, from + rowsAtOnce));
    await samplesChanged(tx, { siteId, samplePointIds: [samplePointId] });
  });
  return rows.length;
}

/** The point, then the day and time (UTC) at which the sample was taken. */
const numberOf = (sensor: DemoSensor, { takenMs }: LaboratoryResult): string =>
  `${sensor.sampling.point.replaceAll(' ', '')}-${new Date(takenMs).toISOString().slice(2, 16).replace(/[-T:]/g, '')}`;
