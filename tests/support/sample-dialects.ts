import type { SampleMapping } from '../../shared/contracts/sample-import.ts';
import { wallClock } from '../../shared/rules/format.ts';
import { createTimeReader } from '../../shared/rules/local-time.ts';
import type { SeededRandom } from '../trials/seeded-random.ts';
import { type ReadFile, readSamples, site } from './read-samples.ts';
import { type Cell, workbookOf } from './workbook.ts';

/** A sample as a laboratory knows it, before any system writes it down. */
export interface TrueSample {
  number: string;
  takenAt: number;
  value: string;
  qualifier: '' | '<' | '>';
  remark: string;
}

/** How a system writes its samples. */
export interface Dialect {
  delimiter: ',' | ';' | '\t' | '|';
  decimal: '.' | ',';
  order: 'iso' | 'day-month-year' | 'month-day-year';
  lineEnd: '\n' | '\r\n' | '\r';
  encoding: 'utf-8' | 'utf-16le' | 'utf-16be' | 'windows-1252' | 'workbook';
  mark: boolean;
  quoteAll: boolean;
  titleLines: number;
  /** Of a workbook: values and times as numbers and dates rather than text. */
  typed: boolean;
}

const pick = <T>(random: SeededRandom, from: readonly T[]): T =>
  from[Math.floor(random.uniform() * from.length)]!;
const letters = [...'aZkx09 ,;|\t"\n.-<=°µ€'];
const textOf = (random: SeededRandom, most: number) =>
  Array.from({ length: Math.floor(random.uniform() * (most + 1)) }, () => pick(random, letters)).join('');
const zone = site.zone;
const isPlain = createTimeReader({ order: 'iso', zone });

function timeOf(random: SeededRandom): number {
  for (;;) {
    const at = Date.UTC(2015, 0, 1) + Math.floor(random.uniform() * 11 * 365 * 1440) * 60_000;
    if (isPlain(written(at, 'iso')).ok) return at;
  }
}

function written(at: number, order: Dialect['order']): string {
  const { year, month, day, hour, minute } = wallClock(at, zone);
  const two = (part: number) => String(part).padStart(2, '0');
  const clock = `${two(hour)}:${two(minute)}`;
  if (order === 'iso') return `${year}-${two(month)}-${two(day)} ${clock}`;
  const [first, second] = order === 'day-month-year' ? [day, month] : [month, day];
  return `${two(first)}/${two(second)}/${year} ${clock}`;
}

export function trueSamples(random: SeededRandom): TrueSample[] {
  return Array.from({ length: 1 + Math.floor(random.uniform() * 12) }, (_, index) => ({
    number: `L${index}${textOf(random, 6).trim()}`,
    takenAt: timeOf(random),
    value: ((random.uniform() - 0.3) * 10 ** Math.floor(random.uniform() * 6)).toFixed(
      Math.floor(random.uniform() * 4),
    ),
    qualifier: pick(random, ['', '', '', '', '<', '>'] as const),
    remark: textOf(random, 8),
  }));
}

export function someDialect(random: SeededRandom): Dialect {
  const yes = () => random.uniform() < 0.5;
  return {
    delimiter: pick(random, [',', ';', '\t', '|'] as const),
    decimal: pick(random, ['.', ','] as const),
    order: pick(random, ['iso', 'day-month-year', 'month-day-year'] as const),
    lineEnd: pick(random, ['\n', '\r\n', '\r'] as const),
    encoding: pick(random, ['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const),
    mark: yes(),
    quoteAll: yes(),
    titleLines: Math.floor(random.uniform() * 4),
    typed: yes(),
  };
}

const header = ['Sample no.', 'Taken', 'Value', 'Unit', 'Point', 'Remark'];

function encoded(text: string, { encoding, mark }: Dialect): Uint8Array {
  if (encoding === 'windows-1252')
    return new Uint8Array(Buffer.from(text.replaceAll('€', '\u0080'), 'latin1'));
  if (encoding === 'utf-8') return new TextEncoder().encode(`${mark ? '\ufeff' : ''}${text}`);
  const bytes = Buffer.from(`\ufeff${text}`, 'utf16le');
  return new Uint8Array(encoding === 'utf-16be' ? bytes.swap16() : bytes);
}

/** The samples as a system of that dialect writes them. */
export function write(samples: readonly TrueSample[], dialect: Dialect): Uint8Array {
  const { delimiter, decimal, order, lineEnd, quoteAll, titleLines } = dialect;
  const result = ({ value, qualifier }: TrueSample) => `${qualifier}${value.replace('.', decimal)}`;
  const titles = Array.from(
    { length: titleLines },
    (_, index) => ['Weekly report', 'Works laboratory', 'Printed'][index]!,
  );
  if (dialect.encoding === 'workbook') {
    const local = (at: number) => new Date(`${written(at, 'iso').replace(' ', 'T')}:00Z`);
    const rows = samples.map((sample): Cell[] => [
      sample.number,
      dialect.typed ? local(sample.takenAt) : written(sample.takenAt, order),
      dialect.typed && sample.qualifier === '' ? Number(sample.value) : result(sample),
      '°C',
      'KX-09',
      sample.remark,
    ]);
    return workbookOf({
      Cover: [['Samples']],
      Results: [...titles.map((title) => [title]), header, ...rows],
    });
  }
  const quote = (text: string) =>
    quoteAll || /["\n\r]/.test(text) || text.includes(delimiter) ? `"${text.replaceAll('"', '""')}"` : text;
  const rows = samples.map((sample) => [
    sample.number,
    written(sample.takenAt, order),
    result(sample),
    '°C',
    'KX-09',
    sample.remark,
  ]);
  const lines = [...titles, ...[header, ...rows].map((cells) => cells.map(quote).join(delimiter))];
  return encoded(lines.join(lineEnd), dialect);
}

/** What differs between the samples and those read back from a file of that dialect; empty where nothing does. */
export async function differences(samples: readonly TrueSample[], dialect: Dialect): Promise<string[]> {
  const { delimiter, decimal, order } = dialect;
  const said: Partial<SampleMapping> = { decimal, dateOrder: order, zone };
  if (dialect.encoding !== 'workbook') said.delimiter = delimiter;
  const read = await readSamples(write(samples, dialect), { said });
  return [...mistaken(read, dialect), ...samples.flatMap((sample, index) => differing(read, sample, index))];
}

/** What the file shows by itself may be open, never wrong. */
function mistaken({ proposed }: ReadFile, { decimal, order, delimiter, encoding, typed }: Dialect): string[] {
  const wrong: string[] = [];
  const dated = encoding === 'workbook' && typed ? 'iso' : order;
  if (proposed.dateOrder !== null && proposed.dateOrder !== dated) wrong.push(`order ${proposed.dateOrder}`);
  if (encoding === 'workbook') return wrong;
  if (proposed.delimiter !== delimiter) wrong.push(`delimiter ${proposed.delimiter}`);
  if (proposed.decimal !== null && proposed.decimal !== decimal && proposed.decimal !== '.')
    wrong.push(`decimal ${proposed.decimal}`);
  return wrong;
}

function differing({ rows }: ReadFile, sample: TrueSample, index: number): string[] {
  const { sample: found, reasons } = rows[index] ?? {};
  if (!found) return [`${index}: ${JSON.stringify(reasons)}`];
  const same =
    found.sampleNumber === sample.number.trim() &&
    found.takenAt === sample.takenAt &&
    found.value === Number(sample.value) &&
    (found.qualifier ?? '') === sample.qualifier &&
    found.unit === '°C' &&
    found.samplePointId === 9;
  return same ? [] : [`${index}: ${JSON.stringify({ found, sample })}`];
}
