import { describe, expect, test } from 'vitest';
import { type Ask, sampling } from '../../shared/contracts/sampling.ts';
import AskLine from '../../src/components/sampling/AskLine.vue';
import EnterValue from '../../src/components/sampling/EnterValue.vue';
import NotTakenForm from '../../src/components/sampling/NotTakenForm.vue';
import UnsentList from '../../src/components/sampling/UnsentList.vue';
import { mountPart } from './mount-part.ts';

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

describe('a sample asked for', () => {
  const line = (props: object) =>
    mountPart(AskLine, {
      props: { ask, points: [], site, mayEnter: true, kept: false, first: true, now: new Date(at), ...props },
    });

  test('offers to enter its value or to say why not, to who may enter and while it is open', () => {
    expect(
      line({})
        .findAll('button')
        .map((button) => button.text()),
    ).toEqual(['Enter value', 'Not taken']);
    expect(line({ mayEnter: false }).findAll('button')).toEqual([]);
    expect(line({ kept: true }).get('.line').text()).toMatch(/Kept on this device, not sent yet$/);
    expect(line({ ask: { ...ask, state: taken } }).findAll('button')).toEqual([]);
  });
});

describe('a value typed at the sample point', () => {
  const form = (props: object = {}) =>
    mountPart(EnterValue, { props: { ask, before: null, points: [], site, errors: {}, ...props } });

  test('is taken as it was typed, filled now, with the number of the bottle and the unit beside it', async () => {
    const part = form();
    expect(part.text()).toContain('°C');
    await part.get('input[inputmode="decimal"]').setValue(' 1482,5 ');
    const before = Date.now();
    await part.get('form').trigger('submit');
    const [[body, words]] = part.emitted('enter') as [[{ takenAt: string; entryKey: string }, string]];
    expect(body).toMatchObject({
      samplePointId: 1,
      methodId: 1,
      value: '1482,5',
      unit: '°C',
      sampleNumber: 'KX-09-1202-1',
    });
    expect(Date.parse(body.takenAt)).toBeGreaterThanOrEqual(before);
    expect(words).toBe('KX-09: 1482,5 °C');
  });

  test('is asked for where it is missing', async () => {
    const part = form();
    await part.get('form').trigger('submit');
    expect(part.text()).toContain('Write the value.');
    expect(part.emitted('enter')).toBeUndefined();
  });

  test('may have been filled earlier', async () => {
    const part = form();
    await part.get('.time button').trigger('click');
    await part.get('input[inputmode="decimal"]').setValue('1');
    await part.get('input[type="datetime-local"]').setValue('2026-11-29T14:00');
    await part.get('form').trigger('submit');
    expect(part.emitted('enter')![0]![0]).toMatchObject({ takenAt: '2026-11-29T13:00:00.000Z' });
    await part.get('input[type="datetime-local"]').setValue('2026-03-29T02:30');
    await part.get('form').trigger('submit');
    expect(part.emitted('enter')).toHaveLength(1);
  });

  test('that was refused is mended under the same key, what was said beside its field', async () => {
    const before = {
      entryKey: 'the key',
      samplePointId: 1,
      methodId: 2,
      sampleNumber: '',
      takenAt: at,
      value: '1,482',
      unit: '°F',
      note: '',
    };
    const part = form({ ask: null, before, errors: { value: 'Write 1.482 or 1482.' } });
    expect(part.text()).toContain('Write 1.482 or 1482.');
    await part.get('input[inputmode="decimal"]').setValue('1482');
    await part.get('form').trigger('submit');
    expect(part.emitted('enter')![0]![0]).toEqual({ ...before, value: '1482' });
  });
});

describe('a sample that was not taken', () => {
  const form = () => mountPart(NotTakenForm, { props: { ask } });
  const press = (part: ReturnType<typeof form>, label: string) =>
    part
      .findAll('button')
      .find((button) => button.text() === label)!
      .trigger('click');

  test('is told with one press', async () => {
    const part = form();
    await press(part, 'No safe access');
    const [body, words] = part.emitted('enter')![0] as [object, string];
    expect(body).toMatchObject({
      samplePointId: 1,
      askedFor: ask.askedFor,
      reason: 'no-safe-access',
      note: '',
    });
    expect(words).toBe('KX-09: not taken, no safe access');
  });

  test('for another reason needs it written', async () => {
    const part = form();
    await press(part, 'Other');
    await part.get('form').trigger('submit');
    expect(part.text()).toContain('Write why it was not taken.');
    expect(part.emitted('enter')).toBeUndefined();
    await part.get('input').setValue('Ladder iced over');
    await part.get('form').trigger('submit');
    expect(part.emitted('enter')![0]![0]).toMatchObject({ reason: 'other', note: 'Ladder iced over' });
  });
});

describe('entries kept on this device', () => {
  const kept = {
    entryKey: 'a',
    siteId: 1,
    body: { kind: 'not-taken' as const, body: {} },
    words: 'KX-09: not taken, bottle lost',
    writtenAt: at,
    refusal: null,
  };
  const list = (props: object) =>
    mountPart(UnsentList, {
      props: {
        kept: [kept],
        points: [],
        site,
        sending: false,
        unkept: false,
        first: true,
        now: new Date(at),
        ...props,
      },
    });

  test('are counted', () => {
    expect(
      list({ kept: [kept, { ...kept, entryKey: 'b' }] })
        .get('h2')
        .text(),
    ).toBe('2 entries kept on this device, not sent yet');
    expect(list({}).get('h2').text()).toBe('1 entry kept on this device, not sent yet');
  });

  test('say what the server said against them, and can then be discarded', () => {
    const refusal = { says: 'This sample point is not one in use.', fields: {} };
    const part = list({ kept: [{ ...kept, refusal }] });
    expect(part.text()).toContain(refusal.says);
    expect(part.findAll('button').map((button) => button.text())).toContain('Discard');
    expect(part.get('h2').text()).toBe('1 entry refused, kept on this device');
    expect(list({}).text()).not.toContain('Discard');
  });
});
