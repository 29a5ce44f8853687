import { describe, expect, test } from 'vitest';
import type { PlantEvent } from '../../shared/contracts/events.ts';
import {
  blankEvent,
  momentAt,
  ownFields,
  readEventForm,
  readMoment,
  sayDay,
} from '../../src/components/events/event-form.ts';
import { eventMarks } from '../../src/components/events/event-marks.ts';
import { sayStandstills } from '../../src/components/events/event-words.ts';
import FileRows from '../../src/components/events/FileRows.vue';
import MomentField from '../../src/components/events/MomentField.vue';
import { mountPart } from './mount-part.ts';

const zone = 'Europe/Copenhagen';
const now = new Date('2026-11-30T12:00:00Z');

describe('a time typed on the clock of the site', () => {
  test('begins at now and is read back as the same minute', () => {
    expect(momentAt(now, zone).text).toBe('2026-11-30T13:00');
    expect(momentAt(now, 'Asia/Kolkata').text).toBe('2026-11-30T17:30');
    expect(readMoment(momentAt(now, zone), zone)).toEqual({ ok: true, at: now.toISOString() });
  });

  test('is asked about where the clocks showed it twice, and refused where they skipped it', () => {
    const text = '2026-10-25T02:30';
    expect(readMoment({ text, which: null }, zone)).toMatchObject({
      ok: false,
      twice: { earlier: '2026-10-25T00:30:00.000Z', later: '2026-10-25T01:30:00.000Z' },
    });
    expect(readMoment({ text, which: 'later' }, zone)).toEqual({ ok: true, at: '2026-10-25T01:30:00.000Z' });
    expect(readMoment({ text: '2026-03-29T02:30', which: null }, zone)).toMatchObject({
      ok: false,
      says: expect.stringContaining('did not occur'),
    });
    expect(readMoment({ text: ' ', which: null }, zone)).toMatchObject({
      says: 'Give the day and the time.',
    });
  });

  test('shows both of a double hour as choices, and forgets the choice with another time', async () => {
    const props = { label: 'When', zone, siteName: 'Tarnby', now };
    const field = mountPart(MomentField, {
      props: { ...props, modelValue: { text: '2026-10-25T02:30', which: null } },
    });
    const choices = field.findAll('[role="radio"]');
    expect(choices.map((choice) => choice.text())).toEqual([
      '02:30 the first time, Tarnby time (UTC+2)',
      '02:30 the second time, Tarnby time (UTC+1)',
    ]);
    await choices[1]!.trigger('click');
    expect(field.emitted('update:modelValue')!.at(-1)).toEqual([
      { text: '2026-10-25T02:30', which: 'later' },
    ]);
    await field.find('input').setValue('2026-10-25T04:30');
    expect(field.emitted('update:modelValue')!.at(-1)).toEqual([{ text: '2026-10-25T04:30', which: null }]);
    field.unmount();
  });
});

describe('the form of an event', () => {
  test('offers a start of what is stopped, and nothing otherwise', () => {
    expect(blankEvent('unit 3', true, now, zone).kind).toBe('start');
    expect(blankEvent('unit 3', false, now, zone).kind).toBeNull();
  });

  test('says beside each field what is missing', () => {
    const form = { ...blankEvent(null, false, now, zone), at: { text: '', which: null } };
    expect(Object.keys(readEventForm(form, zone).errors ?? {})).toEqual(['subject', 'kind', 'at']);
  });

  test('sends the end of a stop, and drops one that another kind left behind', () => {
    const form = {
      ...blankEvent('unit 3', false, now, zone),
      until: { text: '2026-11-30T13:30', which: null },
    };
    expect(readEventForm({ ...form, kind: 'stop' }, zone).body).toEqual({
      unitId: 3,
      kind: 'stop',
      at: now.toISOString(),
      until: '2026-11-30T12:30:00.000Z',
      note: '',
    });
    expect(readEventForm({ ...form, kind: 'grade-change', subject: 'sensor 9' }, zone).body).toMatchObject({
      softSensorId: 9,
      until: null,
    });
  });

  test('gets the server’s sentence about a unit or a soft sensor under its one field', () => {
    expect(ownFields({ unitId: 'Not here.', at: 'Ahead.' })).toEqual({ subject: 'Not here.', at: 'Ahead.' });
    expect(ownFields({ at: 'Ahead.' })).toEqual({ at: 'Ahead.' });
  });

  test('shows what a date means under either order', () => {
    expect(sayDay('03/02/2026 06:00', 'day-month-year', zone)).toBe('3 Feb 2026');
    expect(sayDay('03/02/2026', 'month-day-year', zone)).toBe('2 Mar 2026');
  });
});

const event = (
  id: number,
  kind: PlantEvent['kind'],
  at: string,
  softSensorId: number | null = null,
): PlantEvent => ({
  id,
  siteId: 1,
  unitId: 1,
  unitName: 'Kiln 1',
  softSensorId,
  tagName: softSensorId === null ? null : 'TY-1',
  kind,
  at,
  note: '',
  recordedBy: 'Tove Halbrook',
  recordedAt: at,
  withdrawnAt: null,
  withdrawnBy: null,
  withdrawnReason: '',
});

describe('events in a chart', () => {
  test('are spans from a stop to the start of the same unit, and lines for all else', () => {
    const marks = eventMarks([
      event(6, 'stop', '2026-11-20T00:00:00Z'),
      event(5, 'grade-change', '2026-11-09T00:00:00Z'),
      event(4, 'start', '2026-11-05T00:00:00Z'),
      event(3, 'start', '2026-11-04T00:00:00Z', 9),
      event(2, 'turnaround', '2026-11-03T00:00:00Z'),
      { ...event(1, 'stop', '2026-11-01T00:00:00Z'), withdrawnAt: '2026-11-02T00:00:00Z' },
    ]);
    expect(marks).toMatchObject([
      {
        at: ['2026-11-03T00:00:00Z', '2026-11-20T00:00:00Z'],
        until: ['2026-11-05T00:00:00Z', null],
        words: ['Turnaround', 'Stop'],
      },
      { at: ['2026-11-04T00:00:00Z', '2026-11-09T00:00:00Z'], words: ['Start', 'Grade change'] },
    ]);
  });

  test('leave no mark where there are none', () => expect(eventMarks([])).toEqual([]));
});

describe('the headline of the events of a site', () => {
  const at = {
    unitId: 1,
    unitName: 'Kiln 1',
    softSensorId: null,
    tagName: null,
    since: '2026-11-28T03:10:00Z',
  };
  test.each([
    [[], 'Nothing is recorded as stopped at Tarnby.'],
    [[at], 'Kiln 1 at Tarnby has been stopped since 28 Nov 2026 04:10.'],
    [[at, { ...at, softSensorId: 9, tagName: 'TY-1' }], '1 unit and 1 soft sensor are stopped at Tarnby.'],
    [[at, at], '2 units are stopped at Tarnby.'],
  ])('%#', (stopped, says) => expect(sayStandstills(stopped, 'Tarnby', zone)).toBe(says));
});

describe('the rows of a file', () => {
  test('stand with what was written and what becomes of it', () => {
    const written = { subject: 'Kiln 9', event: 'stop', at: '2026-11-28 04:10', until: '', note: '' };
    const rows = [{ line: 4, outcome: 'refused', says: 'There is no unit “Kiln 9”.', written }];
    const counts = { rows: 412, added: 411, events: 411, skipped: 0, refused: 1 };
    const table = mountPart(FileRows, { props: { rows, counts } });
    const cells = table.findAll('tbody td').map((cell) => cell.text());
    expect(cells).toEqual([
      '4',
      'Kiln 9',
      'stop',
      '2026-11-28 04:10',
      '–',
      'refused',
      'There is no unit “Kiln 9”.',
    ]);
    expect(table.text()).toContain('1 of 412 rows are shown.');
    table.unmount();
  });
});
