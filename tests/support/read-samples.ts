import { isWorkbook, readWorkbook } from '../../server/features/samples/workbook.ts';
import type { FileEvidence, FileNotice } from '../../shared/contracts/sample-evidence.ts';
import type { ProposedMapping, SampleMapping } from '../../shared/contracts/sample-import.ts';
import type { SampleMends } from '../../shared/contracts/sample-mends.ts';
import { sayEvidence, sayNotice } from '../../shared/rules/sample-evidence-sentences.ts';
import { type FileRead, tableOf } from '../../shared/rules/sample-file.ts';
import { findNotices } from '../../shared/rules/sample-notices.ts';
import {
  type Beside,
  type DecidedRow,
  decideRows,
  type StoredSample,
} from '../../shared/rules/sample-outcomes.ts';
import { proposeMapping } from '../../shared/rules/sample-proposal.ts';
import { holdsTimesOfDay } from '../../shared/rules/sample-reading.ts';
import type { SampleRegistry } from '../../shared/rules/sample-registry.ts';
import { createRowReader } from '../../shared/rules/sample-row.ts';
import { sayFileProblem, sayReason } from '../../shared/rules/sample-sentences.ts';
import { decodeFile, type FileProblem } from '../../shared/rules/sample-text.ts';

/** A site on Copenhagen's clock: KX-09, also called Crown 9, with a soft sensor in °C; NX-01 with one in mg/m³. */
export const site: SampleRegistry = {
  zone: 'Europe/Copenhagen',
  pointsByName: new Map([
    ['kx-09', { id: 9, name: 'KX-09' }],
    ['crown 9', { id: 9, name: 'KX-09' }],
    ['nx-01', { id: 1, name: 'NX-01' }],
    ['ox-02', { id: 2, name: 'OX-02' }],
  ]),
  sensorsAt: new Map([
    [9, [{ tagName: 'TY-1402', unit: '°C', methodId: 4 }]],
    [1, [{ tagName: 'NY-1', unit: 'mg/m³', methodId: null }]],
    [2, [{ tagName: 'OY-2', unit: '%', methodId: null }]],
  ]),
};
export const now = Date.parse('2026-11-30T05:40:00Z');

export interface Asked {
  said?: Partial<SampleMapping>;
  stored?: ReadonlyMap<string, StoredSample>;
  beside?: Partial<Beside>;
  mends?: SampleMends;
  methodUnit?: string | null;
  registry?: SampleRegistry;
  uploadedAt?: number;
}

export interface ReadFile {
  proposed: ProposedMapping;
  /** What the file was read by. */
  mapping: SampleMapping;
  because: FileEvidence[];
  /** What the page says of the file. */
  says: string[];
  rows: DecidedRow[];
  notices: FileNotice[];
  saysNotices: string[];
  /** The outcome of the row on a line and what is said of it. */
  at: (line: number) => { outcome: string; words: string; sample: DecidedRow['sample'] };
}

export const textFile = (text: string): FileRead => ({ kind: 'text', text, encoding: 'utf-8' });

/** The file as the server takes it in, without its database; or why it is not taken. */
export async function takeIn(bytes: Uint8Array): Promise<FileRead | FileProblem> {
  if (isWorkbook(bytes)) {
    const read = await readWorkbook(bytes);
    return read.ok ? { kind: 'workbook', sheets: read.sheets } : read.problem;
  }
  const decoded = decodeFile(bytes);
  return decoded.ok ? { kind: 'text', text: decoded.text, encoding: decoded.encoding } : decoded.problem;
}

/** What was read from a file, or an error that says why it holds no samples. */
export async function readSamples(content: string | Uint8Array, asked: Asked = {}): Promise<ReadFile> {
  const file = await takeIn(typeof content === 'string' ? new TextEncoder().encode(content) : content);
  const read = 'code' in file ? file : readFile(file, asked);
  if ('code' in read) throw new Error(sayFileProblem(read));
  return read;
}

/**
 * Reads a file as taken in to the outcome of each row, as the server does, without its database. What the file leaves
 * open is said as decimal points, day before month and the clock of the site.
 */
export function readFile(file: FileRead, asked: Asked = {}): ReadFile | FileProblem {
  const { registry = site, stored = new Map<string, StoredSample>() } = asked;
  const proposal = proposeMapping(file, registry);
  if (!proposal.ok) return proposal.problem;
  const { proposed, because } = proposal;
  const chosen = {
    decimal: proposed.decimal ?? '.',
    dateOrder: proposed.dateOrder ?? 'day-month-year',
    zone: proposed.zone ?? registry.zone,
    unit: proposed.unit ?? '',
  };
  const mapping = { ...proposed, ...chosen, ...asked.said } as SampleMapping;
  const table = tableOf(file, mapping);
  if (!table.ok) return table.problem;
  const at = table.rows.findIndex(({ line }) => line === mapping.headerLine);
  const rows = table.rows.slice(at + 1);
  const read = rows.map(
    createRowReader({
      mapping,
      registry,
      header: table.rows[at]!.cells,
      now,
      methodUnit: asked.methodUnit ?? null,
      mends: asked.mends,
      uploadedAt: asked.uploadedAt,
      wholeIsMidnight: holdsTimesOfDay(rows, mapping),
    }),
  );
  const beside = { repeatability: null, reproducibility: null, lastValues: new Map(), ...asked.beside };
  const decided = decideRows(read, stored, beside);
  const notices = findNotices(decided, { mapping, registry, titleLines: at, ...beside });
  return {
    proposed,
    mapping,
    because,
    says: because.map((one) => sayEvidence(one, registry.zone)),
    rows: decided,
    notices,
    saysNotices: notices.map(sayNotice),
    at: (line) => {
      const row = decided.find((one) => one.row.line === line);
      if (!row) throw new Error(`No row begins on line ${line}.`);
      const said = row.reasons.map((reason) => sayReason(reason, mapping.zone)).join(' ');
      const words = said.replaceAll('\u00a0', ' ');
      return { outcome: row.outcome, words, sample: row.sample };
    },
  };
}
