import { sampleRow } from '../../shared/contracts/sample-import.ts';
import { countOutcomes, showRow } from '../../shared/rules/sample-outcomes.ts';
import { sayFileProblem, sayReason } from '../../shared/rules/sample-sentences.ts';
import type { FileProblem } from '../../shared/rules/sample-text.ts';
import type { SeededRandom } from '../trials/seeded-random.ts';
import { type ReadFile, readFile, site, takeIn } from './read-samples.ts';
import { workbookParts, zipOf } from './workbook.ts';
import { type Dialect, someDialect, trueSamples, write } from './sample-dialects.ts';

const pick = <T>(random: SeededRandom, from: readonly T[]): T =>
  from[Math.floor(random.uniform() * from.length)]!;
const place = (random: SeededRandom, bytes: Uint8Array) => Math.floor(random.uniform() * (bytes.length + 1));
const nasty = [
  '"',
  ';',
  ',',
  '\n',
  '\r',
  '\u0000',
  '=',
  '1e999',
  '1.2E+05',
  '29.03.2026 02:30',
  '99999.5',
  '-999',
  '10-May',
  '∞',
  '°F',
  'composite 24 h',
  'total',
  '2026-11-28T06:10:00Z',
  '{}',
  '<',
  '\ufeff',
  '0x10',
  '__proto__',
  'constructor',
].map((text) => new TextEncoder().encode(text));

type Mutation = (bytes: Uint8Array, random: SeededRandom) => Uint8Array;
const join = (...parts: Uint8Array[]) => new Uint8Array(Buffer.concat(parts));
const mutations: Mutation[] = [
  (bytes, random) => {
    const flipped = bytes.slice();
    for (let count = 1 + Math.floor(random.uniform() * 8); count > 0 && bytes.length > 0; count--)
      flipped[Math.floor(random.uniform() * bytes.length)]! ^= 1 << Math.floor(random.uniform() * 8);
    return flipped;
  },
  (bytes, random) => bytes.slice(0, place(random, bytes)),
  (bytes, random) => bytes.slice(place(random, bytes)),
  (bytes, random) => {
    const [from, to] = [place(random, bytes), place(random, bytes)].sort((a, b) => a - b) as [number, number];
    return join(bytes.slice(0, to), bytes.slice(from));
  },
  (bytes, random) => {
    const at = place(random, bytes);
    return join(bytes.slice(0, at), pick(random, nasty), bytes.slice(at));
  },
  (_, random) =>
    Uint8Array.from({ length: Math.floor(random.uniform() * 400) }, () => Math.floor(random.uniform() * 256)),
];

const gentle = [mutations[0]!, mutations[4]!];

/** A file of samples, harmed: bytes flipped, cut off, doubled, put in or all random; now and then more than once. */
export function harmedFile(random: SeededRandom, kind?: Dialect['encoding']): Uint8Array {
  const dialect = someDialect(random);
  let bytes = write(trueSamples(random), kind ? { ...dialect, encoding: kind } : dialect);
  // Gentle ones more often, so that most files still hold rows.
  do bytes = pick(random, random.uniform() < 0.5 ? gentle : mutations)(bytes, random);
  while (random.uniform() < 0.3);
  return bytes;
}

/** A workbook whose archive is sound, and one of whose files inside is harmed. */
export function harmedInside(random: SeededRandom): Uint8Array {
  const rows = trueSamples(random).map(({ number, takenAt, value }) => [
    number,
    new Date(takenAt),
    Number(value),
    '°C',
    'KX-09',
  ]);
  const parts = workbookParts({ Results: [['Sample no.', 'Taken', 'Value', 'Unit', 'Point'], ...rows] });
  const harmed = Math.floor(random.uniform() * parts.length);
  return zipOf(
    parts.map(({ name, content }, index) => {
      const bytes = new Uint8Array(Buffer.from(content));
      return { name, content: index === harmed ? pick(random, mutations)(bytes, random) : bytes };
    }),
  );
}

const isSentence = (text: string): boolean =>
  /^\S.*[.?]$/s.test(text) && !/undefined|NaN|\[object/.test(text);

function wrongIn(read: ReadFile): string[] {
  const wrong: string[] = [];
  const mapping = read.mapping;
  const lines = new Set(read.rows.map(({ row }) => row.line));
  if (lines.size !== read.rows.length || lines.has(0)) wrong.push('lines of rows repeat');
  const counts = countOutcomes(read.rows);
  if (counts.rows !== counts.added + counts.held + counts.skipped + counts.refused)
    wrong.push('counts do not add up');
  for (const row of read.rows) {
    if (!sampleRow.safeParse(showRow(row, mapping, site)).success)
      wrong.push(`row ${row.row.line} can’t be shown`);
    if (row.outcome === 'refused' && row.reasons.length === 0)
      wrong.push(`row ${row.row.line} is refused without a reason`);
    if (row.outcome !== 'refused' && row.outcome !== 'skipped' && !row.sample)
      wrong.push(`row ${row.row.line} has no sample`);
    if (row.sample && !Number.isFinite(row.sample.value)) wrong.push(`row ${row.row.line} is no number`);
    for (const reason of row.reasons) {
      const said = sayReason(reason, site.zone);
      if (!isSentence(said)) wrong.push(`“${said}”`);
    }
  }
  for (const said of [...read.says, ...read.saysNotices]) if (!isSentence(said)) wrong.push(`“${said}”`);
  return wrong;
}

export interface Fate {
  /** Why the file as a whole was not taken. */
  problem: FileProblem['code'] | null;
  rows: number;
  refused: number;
  ms: number;
  wrong: string[];
}

/** Reads a harmed file: it is refused as a whole with a sentence, or row by row, and nothing is thrown. */
export async function fateOf(bytes: Uint8Array): Promise<Fate> {
  const started = performance.now();
  const read = await readOrProblem(bytes);
  const ms = performance.now() - started;
  if ('code' in read) {
    const said = sayFileProblem(read);
    return { problem: read.code, rows: 0, refused: 0, ms, wrong: isSentence(said) ? [] : [said] };
  }
  const refused = read.rows.filter(({ outcome }) => outcome === 'refused').length;
  return { problem: null, rows: read.rows.length, refused, ms, wrong: wrongIn(read) };
}

async function readOrProblem(bytes: Uint8Array): Promise<ReadFile | FileProblem> {
  const taken = await takeIn(bytes);
  return 'code' in taken ? taken : readFile(taken);
}
