import { Parser } from 'csv-parse';
import { noCsv } from './decode.ts';
import type { Delimiter } from '../../../shared/contracts/history.ts';

const longestLine = 1024 * 1024;

/** Gets the cells of a line of the file; `line` counts from 1. */
export type TakeRow = (cells: string[], line: number) => void;

/**
 * Turns text, given piece by piece, into rows. As long as no quotation mark has come, CSV is lines and separators and
 * nothing else, and is split as such (measured: 8 times faster); from the first one on csv-parse reads it.
 */
export class RecordReader {
  private readonly delimiter: Delimiter;
  private readonly take: TakeRow;
  private rest = '';
  private line = 0;
  private parser: Parser | null = null;
  private heldReturn = false;

  constructor(delimiter: Delimiter, take: TakeRow) {
    this.delimiter = delimiter;
    this.take = take;
  }

  async push(text: string): Promise<void> {
    if (!this.parser && !text.includes('"')) return this.split(text);
    if (!this.parser) {
      this.parser = this.openParser();
      await this.write(this.rest);
    }
    await this.write(text);
  }

  async end(): Promise<void> {
    if (!this.parser) {
      if (this.rest !== '') this.takeLine(this.rest);
      return;
    }
    const parser = this.parser;
    await new Promise<void>((resolve, reject) => {
      parser.once('error', (error) => reject(quoteTrouble(error)));
      parser.end(() => resolve());
    });
  }

  private split(text: string): void {
    const whole = this.rest + text;
    let from = 0;
    for (let to = whole.indexOf('\n'); to >= 0; to = whole.indexOf('\n', from)) {
      this.takeLine(whole.slice(from, to));
      from = to + 1;
    }
    this.rest = whole.slice(from);
    if (this.rest.length > longestLine) {
      throw noCsv(`Line ${this.line + 1} is longer than 1 MB. Is this a CSV with one line for each time?`);
    }
  }

  private takeLine(text: string): void {
    this.line++;
    const line = text.endsWith('\r') ? text.slice(0, -1) : text;
    if (line !== '') this.take(line.split(this.delimiter), this.line);
  }

  private openParser(): Parser {
    const before = this.line;
    const parser: Parser = new Parser({
      delimiter: this.delimiter,
      record_delimiter: '\n',
      relax_column_count: true,
      relax_quotes: true,
      skip_empty_lines: true,
      max_record_size: longestLine,
      on_record: (cells: string[]) => {
        this.take(cells, before + parser.info.lines);
        return null;
      },
    });
    parser.on('error', () => {
      // Told to whoever writes; without a listener it would end the process.
    });
    parser.resume();
    return parser;
  }

  /** csv-parse counts a line break of two characters inside quotation marks as two lines, so it gets one. */
  private async write(text: string): Promise<void> {
    const whole = this.heldReturn ? `\r${text}` : text;
    this.heldReturn = whole.endsWith('\r');
    const even = (this.heldReturn ? whole.slice(0, -1) : whole).replaceAll('\r\n', '\n');
    if (even === '') return;
    await new Promise<void>((resolve, reject) => {
      this.parser!.write(even, (error) => (error ? reject(quoteTrouble(error)) : resolve()));
    });
  }
}

/** What csv-parse says is for programmers; an error of our own passes as it is. */
function quoteTrouble(error: Error & { code?: string; lines?: number }): Error {
  if (!error.code?.startsWith('CSV_') && error.code !== 'INVALID_OPENING_QUOTE') return error;
  const where = error.lines === undefined ? '' : ` near line ${error.lines}`;
  return noCsv(
    `A quotation mark${where} is opened and never closed, so the cells after it can’t be told apart. Close it and send the file again.`,
  );
}
