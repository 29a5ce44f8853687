import { sql } from 'drizzle-orm';
import { ensurePartitions } from '../../server/db/partitions.ts';
import { withClient } from '../../server/db/client.ts';
import { estimatorOf, readInputs } from '../../server/features/estimates/inputs.ts';
import type { RegressionModel } from '../../shared/contracts/models.ts';
import { gridWithin } from '../../shared/numerics/grid.ts';
import { startBenchServer } from './bench-server.ts';
import type { Figure } from './figure.ts';

const inputs = 8;
const minutes = 525_600;
const minuteMs = 60_000;

/** Time to take a year of minutes of eight inputs from the database through a regression. */
export async function replayFigures(adminUrl: string): Promise<Figure[]> {
  const server = await startBenchServer(adminUrl);
  const { context } = server;
  try {
    const startMs = Date.UTC(2025, 0, 1);
    await ensurePartitions(context.db, startMs, startMs + minutes * minuteMs);
    await context.db.execute(sql`insert into sites (name, zone) values ('Bench', 'UTC')`);
    for (let tag = 1; tag <= inputs; tag++) {
      await context.db.execute(sql`
        insert into readings (site_id, tag_id, at, value)
        select 1, ${tag}, to_timestamp(${startMs / 1000} + n * 60), 100 + sin(n / 500.0) from generate_series(0, ${minutes - 1}) n`);
    }
    await context.db.execute(sql`analyze readings`);
    const model: RegressionModel = {
      form: 'regression',
      stepMs: minuteMs,
      holdLimitMs: 10 * minuteMs,
      intercept: 5,
      terms: Array.from({ length: inputs }, (_, i) => ({ tagId: i + 1, coefficient: i - 3 })),
      residualSd: 1,
    };
    const grid = gridWithin(startMs, startMs + (minutes - 1) * minuteMs, minuteMs);
    const started = performance.now();
    const estimated = await withClient(context.pool, async (_db, client) => {
      const columns = await readInputs(client, 1, model, grid);
      const estimator = estimatorOf(model);
      return estimator.run(grid, columns, estimator.start()).estimate.value.length;
    });
    const value = (performance.now() - started) / 1000;
    if (estimated !== minutes) throw new Error(`${estimated} of ${minutes} minutes were estimated`);
    return [
      {
        name: 'a year of minutes through a regression of 8 inputs, from the database',
        value,
        unit: 's',
        peer: '',
        peerValue: null,
        ratio: null,
        target: null,
        met: null,
      },
    ];
  } finally {
    await server.stop();
  }
}
