import { AppError } from '../../../shared/contracts/errors.ts';
import type { Context } from '../../context.ts';
import { withClient } from '../../db/client.ts';
import { ensurePartitions } from '../../db/partitions.ts';
import { Batch } from './batch.ts';
import { batchStored } from './changed.ts';
import { type ImportRow, addCounts, addRefusals, lockImport } from './repo.ts';
import type { Refused } from './rows.ts';
import { storeBatch } from './store.ts';

const readingsInChunk = 200_000;
/** A chunk of lines that hold nothing is ended too, so that progress moves. */
const linesInChunk = 200_000;
const refusalsKept = 1000;

/** Collects the readings and refusals of a chunk and stores each chunk in one transaction with how far the import is. */
export class ChunkStore {
  /** Where a row taker puts what it finds. */
  readonly into: { batch: Batch; refuse: (refused: Refused) => void };
  private readonly context: Context;
  private readonly row: ImportRow;
  private readonly batch = new Batch();
  private refusals: Refused[] = [];
  private refusedValues = 0;
  private kept: number;
  private lineDone: number;

  constructor(context: Context, row: ImportRow, refusalsKeptBefore: number) {
    this.context = context;
    this.row = row;
    this.kept = refusalsKeptBefore;
    this.lineDone = row.lineDone;
    this.into = { batch: this.batch, refuse: (refused) => this.refuse(refused) };
  }

  full(line: number): boolean {
    return this.batch.size >= readingsInChunk || line - this.lineDone >= linesInChunk;
  }

  async flush(line: number): Promise<void> {
    if (line <= this.lineDone) return;
    const { siteId, id, replaceExisting } = this.row;
    for (const month of this.batch.months()) await ensurePartitions(this.context.db, month, month);
    await withClient(this.context.pool, (db, client) =>
      db.transaction(async (tx) => {
        this.claim(await lockImport(tx, siteId, id));
        // The transaction runs on `client`, so COPY on it is part of it.
        const stored = await storeBatch(tx, client, this.batch, { siteId, replaceExisting });
        await batchStored(tx, siteId, stored.changed);
        await addRefusals(tx, { siteId, importId: id }, this.refusals);
        const instants = stored.changed.flatMap(({ first, last }) => [first.getTime(), last.getTime()]);
        await addCounts(tx, this.row, {
          lineDone: line,
          added: stored.added,
          unchanged: stored.unchanged,
          replaced: replaceExisting ? stored.differing : 0,
          keptDifferent: replaceExisting ? 0 : stored.differing,
          refused: this.refusedValues,
          first: instants.length > 0 ? new Date(Math.min(...instants)) : null,
          last: instants.length > 0 ? new Date(Math.max(...instants)) : null,
        });
      }),
    );
    this.lineDone = line;
    this.batch.clear();
    this.refusals = [];
    this.refusedValues = 0;
  }

  private refuse(refused: Refused): void {
    this.refusedValues += refused.values;
    if (this.kept >= refusalsKept) return;
    this.kept++;
    this.refusals.push(refused);
  }

  /** A worker that was given up for dead may still be at it; whoever is behind stops. */
  private claim(now: ImportRow): void {
    if (now.lineDone === this.lineDone && now.runId === this.row.runId) return;
    throw new AppError('conflict', 'This import is being read by another worker already.');
  }
}
