import { describe, expect, test } from 'vitest';
import { type Ask, sampling } from '../../shared/contracts/sampling.ts';
import {
  answeredHere,
  firstOfEach,
  sayAsked,
  sayDetails,
  sayRequest,
  sayShift,
  sayState,
} from '../../src/components/sampling/asked-words.ts';
import type { Entry } from '../../src/queries/sampling.ts';

const example = sampling['sampling.asked'].example;
const ask: Ask = example.asks[0]!;
const site = { name: 'Tarnby Works', zone: 'Europe/Copenhagen' };
const at = '2026-12-01T22:50:00.000Z';
const taken: Ask['state'] = {
  kind: 'taken',
  sampleId: 1,
  sampleNumber: 'KX-09-1201-1',
  takenAt: at,
  asWritten: '1482,5',
  unit: '°C',
};
const notTaken: Ask['state'] = { kind: 'not-taken', reason: 'bottle-lost', note: '', by: 'Tove', at };
const asked = (...states: Ask['state'][]) => ({
  ...example,
  asks: states.map((state, index) => ({ ...ask, key: String(index), state })),
});

describe('a shift', () => {
  test('is told as one sentence', () => {
    const open = { kind: 'open' } as const;
    const stopped = { kind: 'unit-stopped', since: at } as const;
    expect(sayAsked('Tarnby Works', asked(open, open, taken), 'current')).toBe(
      '3 samples are asked for this shift at Tarnby Works: 1 taken.',
    );
    expect(sayAsked('Tarnby Works', asked(open), 'next')).toBe(
      '1 sample is asked for in the next shift at Tarnby Works.',
    );
    expect(sayAsked('Tarnby Works', asked(taken, notTaken, stopped), 'previous')).toBe(
      '3 samples were asked for in the last shift at Tarnby Works: 1 taken, 1 not taken, 1 where the unit is stopped.',
    );
    expect(sayAsked('Tarnby Works', asked(), 'current')).toBe(
      'Nothing is asked for this shift at Tarnby Works.',
    );
  });

  test('says its hours on the clock of the site', () => {
    expect(sayShift(example, site)).toBe('Night, 22:00 to 06:00, Tarnby Works time (UTC+1)');
  });
});

describe('a sample asked for', () => {
  const now = new Date('2026-12-02T00:30:00.000Z');
  const asking = { kind: 'request', requestId: 1, askedBy: 'Marco', reason: 'Reads high' } as const;

  test('names what it is for, how, and the last result with its day where that is not today', () => {
    expect(sayDetails(ask, site.zone, now)).toBe(
      'for TY-1402; Immersion pyrometry; last 1482,5\u00a0°C, 1 Dec 14:00',
    );
    const last = { asWritten: '7', unit: '', takenAt: '2026-12-01T23:10:00.000Z' };
    expect(sayDetails({ ...ask, method: null, last }, site.zone, now)).toBe('for TY-1402; last 7, 00:10');
  });

  test('says who asked and, once, why', () => {
    const asked = { ...ask, method: null, last: null, source: asking };
    expect(sayDetails(asked, site.zone, now)).toBe('for TY-1402, asked by Marco: “Reads high”');
    expect(sayDetails(asked, site.zone, now, false)).toBe('for TY-1402, asked by Marco');
    const other = { ...asked, key: 'd', source: { ...asking, requestId: 2 } };
    expect([...firstOfEach([ask, { ...asked, key: 'b' }, { ...asked, key: 'c' }, other])]).toEqual([
      'b',
      'd',
    ]);
  });

  test('by somebody is told with how many, until when, how far and why', () => {
    const request = sampling['sampling.requests'].example.rows[0]!;
    expect(sayRequest(request, site.zone)).toBe(
      '5 samples asked for by Marco Castellane until 4 Dec 2026 13:00, 2 taken: “The last eight read high.”',
    );
    expect(sayRequest({ ...request, count: 1, taken: 0, reason: '' }, site.zone)).toMatch(
      /^1 sample .* 0 taken\.$/,
    );
  });

  test('says what stands of it', () => {
    expect(sayState({ ...ask, state: taken }, site.zone)).toBe('Taken 23:50: 1482,5\u00a0°C, KX-09-1201-1');
    expect(sayState({ ...ask, state: notTaken }, site.zone)).toBe('Not taken: bottle lost (Tove)');
    const other = { ...notTaken, reason: 'other' as const, note: 'Ladder iced over' };
    expect(sayState({ ...ask, state: other }, site.zone)).toBe('Not taken: Ladder iced over (Tove)');
  });
});

describe('what is answered on this device and not sent yet', () => {
  const three = ['01:00', '03:00', '05:00'].map((time, index) => ({
    ...ask,
    key: `k${index}`,
    suggestedNumber: `KX-09-1202-${index + 1}`,
    askedFor: `2026-12-02T${time}:00.000Z`,
  }));
  const value = (takenAt: string, samplePointId = 1): Entry => ({
    kind: 'value',
    body: {
      entryKey: 'a',
      samplePointId,
      methodId: 1,
      sampleNumber: '',
      takenAt,
      value: '1',
      unit: '',
      note: '',
    },
  });

  test('is the nearest for a value, and the one named for what was not taken', () => {
    expect([...answeredHere(three, [value('2026-12-02T04:40:00Z')])]).toEqual(['k2']);
    const left: Entry = {
      kind: 'not-taken',
      body: {
        entryKey: 'b',
        samplePointId: 1,
        askedFor: three[2]!.askedFor,
        reason: 'bottle-lost',
        note: '',
      },
    };
    expect([...answeredHere(three, [value('2026-12-02T04:40:00Z'), left])].sort()).toEqual(['k1', 'k2']);
  });

  test('is the one whose number the bottle bears, however far from its time it was filled', () => {
    const first = value('2026-12-02T04:40:00Z');
    const numbered = { ...first, body: { ...first.body, sampleNumber: 'KX-09-1202-1' } } as Entry;
    expect([...answeredHere(three, [first, numbered])].sort()).toEqual(['k0', 'k2']);
  });

  test('is nothing at another point or where it is answered already', () => {
    expect(answeredHere(three, [value(at, 2)]).size).toBe(0);
    expect(answeredHere([{ ...three[0]!, state: taken }], [value(at)]).size).toBe(0);
  });
});
