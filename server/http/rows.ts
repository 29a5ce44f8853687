import { and, eq } from 'drizzle-orm';
import type { PgTable, PgColumn } from 'drizzle-orm/pg-core';
import { type AccessTarget, targetParam } from '../../shared/contracts/access.ts';
import type { Queryable } from '../db/client.ts';
import {
  areas,
  calibrations,
  checkResults,
  checkStandards,
  duties,
  events,
  handovers,
  historyImports,
  importProfiles,
  methods,
  replays,
  revisions,
  runs,
  sampleImports,
  samplePoints,
  sampleRequests,
  samples,
  sites,
  softSensors,
  tags,
  units,
} from '../db/schema/index.ts';

declare const permitted: unique symbol;
/** A row that the front door loaded and for which it found the person permitted: possession proves permission. */
export type Permitted<T> = T & { readonly [permitted]: true };

const tables = {
  site: sites,
  area: areas,
  unit: units,
  tag: tags,
  method: methods,
  samplePoint: samplePoints,
  softSensor: softSensors,
  revision: revisions,
  calibration: calibrations,
  event: events,
  duty: duties,
  handover: handovers,
  replay: replays,
  sample: samples,
  sampleImport: sampleImports,
  importProfile: importProfiles,
  sampleRequest: sampleRequests,
  checkStandard: checkStandards,
  checkResult: checkResults,
  historyImport: historyImports,
  run: runs,
} as const;

export type RowTarget = keyof typeof tables;
export type RowOf<T extends RowTarget> = (typeof tables)[T]['$inferSelect'];
export type SiteRow = Permitted<RowOf<'site'>>;

export const isRowTarget = (target: AccessTarget): target is RowTarget => target in tables;

/** Loads the row that an endpoint acts on; null when there is none. */
export async function findRow<T extends RowTarget>(
  db: Queryable,
  target: T,
  params: Record<string, unknown>,
): Promise<{ row: RowOf<T>; siteId: number } | null> {
  const table = tables[target] as unknown as PgTable & { id: PgColumn };
  const id = Number(params[targetParam[target]]);
  if (!Number.isSafeInteger(id) || id < 1 || id > 2_147_483_647) return null;
  const [row] = (await db.select().from(table).where(eq(table.id, id)).limit(1)) as RowOf<T>[];
  if (!row) return null;
  return { row, siteId: target === 'site' ? row.id : (row as unknown as { siteId: number }).siteId };
}

/** Locks a permitted row again inside the transaction that changes it and returns it as it stands now. */
export async function lockRow<T extends RowTarget>(
  tx: Queryable,
  target: T,
  row: Permitted<RowOf<T>>,
): Promise<Permitted<RowOf<T>>> {
  const table = tables[target] as unknown as PgTable & { id: PgColumn; siteId: PgColumn };
  const own = eq(table.id, row.id);
  const where =
    target === 'site' ? own : and(own, eq(table.siteId, (row as unknown as { siteId: number }).siteId));
  const [current] = await tx.select().from(table).where(where).for('update');
  return current as unknown as Permitted<RowOf<T>>;
}
