import { describe, expect, it } from 'vitest';
import type { StandingEvent } from '../../../shared/rules/event-order.ts';
import { countEvents, decideEvents } from '../../../shared/rules/event-outcomes.ts';
import { type EventRegistry, readEvents } from '../../../shared/rules/event-row.ts';
import { sayEventCounts, sayEventFileProblem } from '../../../shared/rules/event-sentences.ts';
import { readEventKind } from '../../../shared/rules/event-words.ts';

const registry: EventRegistry = {
  zone: 'Europe/Copenhagen',
  units: [
    { id: 1, name: 'Melting furnace 1', areaName: 'Hot end' },
    { id: 2, name: 'Kiln 1', areaName: 'Lime' },
    { id: 3, name: 'Kiln 1', areaName: 'Cement' },
  ],
  sensors: [{ id: 9, tagName: 'TY-1402', unitId: 1 }],
};
const site = { name: 'Tarnby Works', zone: registry.zone };
const now = Date.parse('2026-11-30T12:00:00Z');

function decide(
  text: string,
  standing = new Map<string, StandingEvent[]>(),
  dayOrder: 'day-month-year' | null = null,
) {
  const table = readEvents(text, registry, dayOrder);
  if (!table.ok) throw new Error(sayEventFileProblem(table.problem));
  return decideEvents(table.rows, standing, site, now);
}
const says = (text: string): string[] => decide(text).map((row) => `${row.outcome}: ${row.says}`);
const header = 'Unit;Event;Time;Until;Note\n';

describe('a file of events', () => {
  it('names its columns in any order and in usual words, with any delimiter', () => {
    for (const text of [
      'Comment,Date and time,What happened,Equipment\n,2026-11-28 04:10,shut-down,melting furnace 1',
      'tag\ttimestamp\tkind\nTY-1402\t28.11.2026 04:10\tGrade change',
      'Event;End time;Start time;Unit\nTRIP;29.11.2026 14:00;28.11.2026 04:10;Melting furnace 1',
    ]) {
      expect(decide(text).map(({ outcome }) => outcome)).toEqual(['added']);
    }
  });

  it('is read on the clock of the site', () => {
    const [row] = decide(`${header}Melting furnace 1;stop;28.11.2026 04:10;29.11.2026 14:00;Burner 3`);
    expect(row).toMatchObject({
      says: 'Stop of Melting furnace 1 from 28 Nov 2026 04:10 to 29 Nov 2026 14:00.',
      fresh: [
        { kind: 'stop', at: Date.parse('2026-11-28T03:10:00Z') },
        { kind: 'start', at: Date.parse('2026-11-29T13:00:00Z') },
      ],
    });
  });

  it('says of each refused row what is wrong and how to mend it', () => {
    const rows = [
      ';stop;2026-11-28 04:10;;',
      'Kiln 7;stop;2026-11-28 04:10;;',
      'Kiln 1;stop;2026-11-28 04:10;;',
      'Melting furnace 1;party;2026-11-28 04:10;;',
      'Melting furnace 1;;;;',
      'Melting furnace 1;stop;2026-11-28;;',
      'Melting furnace 1;stop;2026-03-29 02:30;;',
      'Melting furnace 1;stop;2026-10-25 02:30;;',
      'Melting furnace 1;stop;2026-02-31 02:30;;',
      `Melting furnace 1;grade change;2026-11-28 04:10;;${'x'.repeat(1001)}`,
      'Melting furnace 1;stop;2026-11-28 04:10;;a;b',
      'Melting furnace 1;grade change;2026-11-28 04:10;2026-11-29 04:10;',
    ];
    const said = says(header + rows.join('\n'));
    expect(said.map((sentence) => sentence.slice(0, 9))).toEqual(rows.map(() => 'refused: '));
    expect(said.map((sentence) => sentence.slice(9))).toEqual([
      'No unit and no soft sensor is named. Write the name of one.',
      'There is no unit or soft sensor “Kiln 7” at Tarnby Works. Correct the name; a file never adds a unit.',
      'Tarnby Works has several units “Kiln 1”. Write the area before it, such as “Lime / Kiln 1”.',
      '“party” is no event known here. Write stop, start, grade change, turnaround, instrument replaced or method change.',
      expect.stringMatching(/^What happened is missing\..* The time is missing\./),
      expect.stringContaining('The time of day is missing'),
      'The time, “2026-03-29 02:30”: The clocks were put forward over this time, so it did not occur. It may be meant as 01:30 or 03:30.',
      'The time, “2026-10-25 02:30”: The clocks showed this time twice. Write it with its offset: 25 Oct 2026 02:30+02:00 or 25 Oct 2026 02:30+01:00.',
      expect.stringContaining('There is no such day.'),
      'The note has 1,001 characters; 1,000 are the most. Shorten it.',
      expect.stringContaining('6 cells where the first line names 5 columns'),
      'Only a stop or a turnaround lasts until a time. Leave the end out.',
    ]);
  });

  it('takes a double hour that is written with its offset, as the sentence says', () => {
    expect(says(`${header}Melting furnace 1;stop;25 Oct 2026 02:30+01:00;;`)).toEqual([
      'added: Stop of Melting furnace 1 from 25 Oct 2026 02:30.',
    ]);
  });

  it('finds a soft sensor by its tag, and refuses one of another unit', () => {
    const text = 'unit,soft sensor,event,time\n';
    expect(says(`${text}Melting furnace 1,ty-1402,method change,2026-11-28 04:10`)[0]).toContain(
      'of TY-1402 on',
    );
    expect(says(`${text},TY-9,method change,2026-11-28 04:10`)[0]).toContain('no soft sensor “TY-9”');
    expect(says(`${text}Lime / Kiln 1,TY-1402,method change,2026-11-28 04:10`)[0]).toContain(
      'TY-1402 belongs to Melting furnace 1',
    );
    expect(says('unit,event,time\nTY-1402,method change,2026-11-28 04:10')[0]).toContain('of TY-1402 on');
    expect(says('unit,event,time\nlime/kiln 1,stop,2026-11-28 04:10')[0]).toContain('Stop of Kiln 1');
  });

  it('asks whether day or month comes first where every day is 12 or less, and then reads it so', () => {
    const text = `${header}Melting furnace 1;stop;03/04/2026 06:00;;`;
    expect(readEvents(text, registry, null)).toMatchObject({
      ok: true,
      rows: [],
      undecided: '03/04/2026 06:00',
    });
    expect(decide(text, undefined, 'day-month-year')[0]!.says).toContain('3 Apr 2026 06:00');
    expect(readEvents(`${header}Melting furnace 1;stop;;;`, registry, null)).toMatchObject({
      undecided: null,
    });
  });

  it('adds nothing the second time', () => {
    const text = `${header}Melting furnace 1;stop;2026-11-28 04:10;2026-11-29 14:00;\nTY-1402;method change;2026-11-02 08:00;;`;
    const first = decide(text);
    expect(sayEventCounts(countEvents(first), false)).toBe('2 rows: 2 will be added as 3 events.');
    expect(countEvents(first).events).toBe(3);
    const standing = new Map([
      ['unit 1', first[0]!.fresh],
      ['sensor 9', first[1]!.fresh],
    ]);
    const second = countEvents(decide(text, standing));
    expect(sayEventCounts(second, false)).toBe('0 added, 2 skipped: recorded already.');
  });

  it('is refused as a whole where it is no such table', () => {
    const problem = (text: string) => {
      const table = readEvents(text, registry, null);
      return table.ok ? 'none' : sayEventFileProblem(table.problem);
    };
    expect(problem('hello')).toContain('Only one column');
    expect(problem('unit;event\nKiln 1;stop')).toContain('None for the time is found in “unit;event”');
    expect(problem('unit;event;time')).toContain('no rows');
    expect(problem('unit;event;time\n"Kiln 1;stop;2026-11-01 06:00')).toContain('never closes');
    const many = 'Melting furnace 1;stop;2026-11-28 04:10\n'.repeat(5001);
    expect(problem(`unit;event;time\n${many}`)).toContain('more than 5,000 rows');
  });
});

describe('words for what happened', () => {
  it.each([
    ['Stopped', 'stop'],
    ['SHUT-DOWN', 'stop'],
    ['trip', 'stop'],
    ['Start up', 'start'],
    ['re-start', 'start'],
    ['planned turnaround', 'turnaround'],
    ['product change', 'grade-change'],
    ['grade-change', 'grade-change'],
    ['thermocouple replaced', 'instrument-replaced'],
    ['Instrument replacement', 'instrument-replaced'],
    ['method change', 'method-change'],
    ['lab method changed', 'method-change'],
  ])('“%s” is a %s', (text, kind) => expect(readEventKind(text)).toBe(kind));

  it.each(['', 'nothing', 'stop thinking', '=1+1'])('“%s” is none', (text) =>
    expect(readEventKind(text)).toBeNull(),
  );
});
