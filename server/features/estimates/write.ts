import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { sql } from 'drizzle-orm';
import type pg from 'pg';
import { from as copyFrom } from 'pg-copy-streams';
import type { EstimateColumn } from '../../../shared/numerics/estimator.ts';
import type { Grid } from '../../../shared/numerics/grid.ts';
import type { Tx } from '../../db/client.ts';
import { rollUpLater } from '../history/changed.ts';
import type { SensorRow } from './repo.ts';

const bad = 2;
const linesAtOnce = 5000;

/** Takes computed readings out again before they are computed anew; open ends are ±Infinity. */
export async function removeEstimates(
  tx: Tx,
  sensor: SensorRow,
  fromMs: number,
  toMs: number,
): Promise<void> {
  const from = Number.isFinite(fromMs) ? new Date(fromMs).toISOString() : '-infinity';
  const to = Number.isFinite(toMs) ? new Date(toMs).toISOString() : 'infinity';
  const removed = await tx.execute<{ first: Date | null; last: Date | null }>(sql`
    with gone as (
      delete from readings where site_id = ${sensor.siteId} and tag_id = ${sensor.estimateTagId}
        and at >= ${from}::timestamptz and at < ${to}::timestamptz returning at)
    select min(at) as first, max(at) as last from gone`);
  const { first, last } = removed.rows[0]!;
  if (first && last)
    await rollUpLater(tx, sensor.siteId, [sensor.estimateTagId], new Date(first), new Date(last));
}

/** Writes one chunk of an estimate; instants without an estimate get no reading. Rows are new and in key order. */
export async function writeEstimates(
  tx: Tx,
  client: pg.PoolClient,
  sensor: SensorRow,
  grid: Grid,
  estimate: EstimateColumn,
): Promise<void> {
  const target = client.query(copyFrom('copy readings (site_id, tag_id, at, value, sd, quality) from stdin'));
  await pipeline(Readable.from(lines(sensor, grid, estimate)), target);
  const last = new Date(grid.startMs + (grid.n - 1) * grid.stepMs);
  await rollUpLater(tx, sensor.siteId, [sensor.estimateTagId], new Date(grid.startMs), last);
}

function* lines(sensor: SensorRow, grid: Grid, estimate: EstimateColumn): Generator<string> {
  const head = `${sensor.siteId}\t${sensor.estimateTagId}\t`;
  const sd = estimate.sd === null ? '\\N' : String(estimate.sd);
  let text = '';
  for (let i = 0; i < grid.n; i++) {
    const value = estimate.value[i]!;
    if (estimate.quality[i] !== bad && Number.isFinite(value)) {
      text += `${head}${new Date(grid.startMs + i * grid.stepMs).toISOString()}\t${value}\t${sd}\t${estimate.quality[i]}\n`;
    }
    if (i % linesAtOnce === 0 && text) {
      yield text;
      text = '';
    }
  }
  if (text) yield text;
}
