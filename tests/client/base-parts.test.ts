import { afterEach, describe, expect, test } from 'vitest';
import ConflictNote from '../../src/components/base/ConflictNote.vue';
import ErrorNote from '../../src/components/base/ErrorNote.vue';
import KeyFigures from '../../src/components/base/KeyFigures.vue';
import ProgressLine from '../../src/components/base/ProgressLine.vue';
import SectionRule from '../../src/components/base/SectionRule.vue';
import { formatBytes } from '../../src/components/base/file-size.ts';
import { isActive } from '../../src/layouts/frame.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

describe('a conflict of two people', () => {
  const fields = [
    { field: 'allowed', label: 'Allowed error', yours: '12 °C', theirs: '10 °C' },
    { field: 'fallback', label: 'Fallback', yours: 'laboratory value', theirs: 'TI-1409' },
  ];

  test('is settled only when every field is chosen', async () => {
    const note = mountPart(ConflictNote, {
      props: { thing: 'the data sheet of TY-1402', who: 'J. Brightwell', when: '4 min ago', fields },
    });
    const [keep] = note.findAll('button');
    expect(note.get('h3').text()).toBe(
      'J. Brightwell saved the data sheet of TY-1402 while you were editing it, 4 min ago.',
    );
    expect(keep!.attributes('disabled')).toBeDefined();
    const radios = note.findAll('[role=radio]');
    expect(radios.map((radio) => radio.attributes('aria-label'))).toEqual([
      'Yours: 12 °C',
      'Theirs: 10 °C',
      'Yours: laboratory value',
      'Theirs: TI-1409',
    ]);
    await radios[0]!.trigger('click');
    expect(note.text()).toContain('1 field to choose');
    await radios[3]!.trigger('click');
    await keep!.trigger('click');
    expect(note.emitted('keep')).toEqual([[{ allowed: 'yours', fallback: 'theirs' }]]);
  });
});

describe('a note of trouble', () => {
  test('says what, why and what to do, and offers the retry by its own words', async () => {
    const note = mountPart(ErrorNote, {
      props: {
        title: 'The samples could not be read.',
        detail: 'No answer.',
        next: 'Check the network.',
        retry: 'Read again',
      },
    });
    expect(note.findAll('p').map((line) => line.text())).toEqual([
      'The samples could not be read.',
      'No answer.',
      'Check the network.',
    ]);
    await note.get('button').trigger('click');
    expect(note.emitted('retry')).toHaveLength(1);
  });

  test('has no button where trying again makes no sense', () => {
    expect(
      mountPart(ErrorNote, { props: { title: 'Gone.' } })
        .find('button')
        .exists(),
    ).toBe(false);
  });
});

describe('progress', () => {
  test('is counted, to screen readers too', () => {
    const line = mountPart(ProgressLine, { props: { done: 124000, total: 320000, noun: 'readings' } });
    expect(line.get('.words').text()).toBe('124,000 of 320,000 readings');
    expect(line.get('[role=progressbar]').attributes('aria-valuetext')).toBe('124,000 of 320,000 readings');
    expect(Number(line.get('[role=progressbar]').attributes('aria-valuenow'))).toBeCloseTo(0.3875, 10);
  });

  test('without a known total counts what is done', () => {
    const line = mountPart(ProgressLine, { props: { done: 12, total: null, noun: 'rows' } });
    expect(line.get('.words').text()).toBe('12 rows');
    expect(line.get('[role=progressbar]').attributes('aria-valuenow')).toBeUndefined();
  });
});

test('a folding section says whether it is open and hides its content', async () => {
  const section = mountPart(SectionRule, {
    props: { heading: 'Duties', foldable: true },
    slots: { default: '<p class="inside">9 d late</p>' },
  });
  expect(section.get('button').attributes('aria-expanded')).toBe('true');
  expect(section.find('.inside').exists()).toBe(true);
  await section.get('button').trigger('click');
  expect(section.emitted('update:folded')).toEqual([[true]]);
  expect(section.get('button').attributes('aria-expanded')).toBe('false');
  expect(section.find('.inside').exists()).toBe(false);
});

test('key figures show an en dash where there is no value, and zero where it is zero', () => {
  const list = mountPart(KeyFigures, {
    props: {
      figures: [
        { term: 'Deputy', value: null },
        { term: 'Late', value: 0 },
      ],
    },
  });
  expect(list.findAll('dd').map((value) => value.text())).toEqual(['–', '0']);
});

test.each([
  [0, '0\u00a0B'],
  [999, '999\u00a0B'],
  [1234, '1.2\u00a0kB'],
  [123_456, '123\u00a0kB'],
  [999_999, '1.0\u00a0MB'],
  [12_345_678, '12.3\u00a0MB'],
])('a file of %d bytes is "%s"', (bytes, words) => {
  expect(formatBytes(bytes)).toBe(words);
});

test('a word of the bar is active on its own path and below it, not on a neighbour that begins alike', () => {
  const link = { label: 'Samples', to: '/samples' };
  expect(isActive(link, '/samples')).toBe(true);
  expect(isActive(link, '/samples/files/7')).toBe(true);
  expect(isActive(link, '/samples-asked')).toBe(false);
  expect(isActive({ ...link, active: false }, '/samples')).toBe(false);
  expect(isActive({ label: 'Board', to: '/' }, '/register')).toBe(false);
});
