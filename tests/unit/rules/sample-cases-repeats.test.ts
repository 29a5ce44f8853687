import { describe, expect, it } from 'vitest';
import { sampleKey, type StoredSample } from '../../../shared/rules/sample-outcomes.ts';
import { type Asked, readSamples } from '../../support/read-samples.ts';

// The nasty cases of laboratory files that concern what a row says: 12 to 15. Fixtures of this project's own making.
const header = 'Sample no.,Taken,Value,Unit,Point,Analyst';
type Row = Partial<Record<'no' | 'taken' | 'value' | 'unit' | 'point' | 'by', string>>;
const line = ({
  no = 'A-1',
  taken = '2026-11-28 06:10',
  value = '1480.5',
  unit = '°C',
  point = 'KX-09',
  by = 'TH',
}: Row) => [no, taken, value, unit, point, by].join(',');
const file = (...rows: Row[]) => [header, ...rows.map(line)].join('\n');
const read = (rows: Row[], asked?: Asked) => readSamples(file(...rows), asked);

describe('case 12: one sample, two values, one analyst', () => {
  const two = [{ value: '1480.5' }, { value: '1483.5' }];

  it('are averaged within the repeatability of the method, and both kept', async () => {
    const { at } = await read(two, { beside: { repeatability: 4 } });
    expect(at(2)).toMatchObject({
      outcome: 'added-with-flag',
      words: 'The mean of 1480.5; 1483.5 °C: 1,482 °C.',
      sample: { value: 1482, replicates: [1480.5, 1483.5] },
    });
    expect(at(3)).toMatchObject({ outcome: 'skipped', words: 'Counted in the mean on row 2.' });
  });

  it('are held beyond it, in one sample with both values', async () => {
    const { at } = await read(two, { beside: { repeatability: 2 } });
    expect(at(2)).toMatchObject({
      outcome: 'held',
      words:
        'Results of one sample (1480.5; 1483.5 °C) lie 3 °C apart, more than the repeatability allows (2 °C): held.',
      sample: { replicates: [1480.5, 1483.5] },
    });
    expect(at(3).outcome).toBe('skipped');
  });

  it('are held where r is not known, and it says so', async () => {
    const { outcome, words } = (await read(two)).at(2);
    expect(outcome).toBe('held');
    expect(words).toContain('no repeatability r of the method to judge them by');
  });

  it('may be three or four, judged by the critical range of ISO 5725-6', async () => {
    const three = (last: string) => [{ value: '1480.0' }, { value: '1482.0' }, { value: last }];
    const asked = { beside: { repeatability: 2.8 } };
    expect((await read(three('1483.3'), asked)).at(2)).toMatchObject({
      outcome: 'added-with-flag',
      sample: { value: 1481.76666667 },
    });
    expect((await read(three('1483.4'), asked)).at(2).outcome).toBe('held');
    expect((await read([...three('1483.4'), { value: '1483.0' }], asked)).at(2).outcome).toBe(
      'added-with-flag',
    );
    const five = [...three('1480.1'), { value: '1480.2' }, { value: '1480.3' }];
    expect((await read(five, asked)).at(2).words).toContain('more than are averaged without being looked at');
  });

  it('contradict each other when two analysts, times or limits are behind them', async () => {
    const asked = { beside: { repeatability: 4 } };
    for (const other of [{ by: 'KB' }, { taken: '2026-11-28 07:10' }, { value: '>1483.5' }]) {
      const { at } = await read([two[0]!, { ...two[1]!, ...other }], asked);
      expect([at(2).outcome, at(3).outcome]).toEqual(['refused', 'refused']);
    }
  });

  it('are no replicates where a row merely stands twice', async () => {
    const { at } = await read([two[0]!, two[1]!, two[0]!], { beside: { repeatability: 4 } });
    expect(at(2).sample?.replicates).toEqual([1480.5, 1483.5]);
    expect(at(4)).toMatchObject({ outcome: 'skipped', words: 'The same sample as row 2.' });
  });
});

describe('cases 13 to 15: a sample that is stored', () => {
  const before: StoredSample = {
    samplePointId: 9,
    sampleNumber: 'A-1',
    sameMethod: true,
    takenAt: Date.parse('2026-11-28T05:10:00Z'),
    takenOn: null,
    value: 1480.5,
    qualifier: null,
    unit: '°C',
  };
  const stored = (change: Partial<StoredSample> = {}) =>
    new Map([[sampleKey(before), { ...before, ...change }]]);

  it('13 and 14: is not overwritten by another value; a correction or re-test is another act', async () => {
    const { outcome, words } = (await read([{}], { stored: stored({ value: 1502 }) })).at(2);
    expect(outcome).toBe('refused');
    expect(words).toBe(
      'This sample is stored with another value: 1502 °C, taken 28 Nov 2026 06:10. A file does not overwrite a stored result: record a correction or a re-test under Samples, or leave the row out.',
    );
  });

  it('15: is skipped where nothing is new', async () => {
    expect((await read([{}], { stored: stored() })).at(2)).toMatchObject({ outcome: 'skipped' });
  });

  it('15: is skipped, too, though it was held or averaged when it came first', async () => {
    const again = await read([{ value: '1479' }, { value: '1482' }], { stored: stored() });
    expect([again.at(2).outcome, again.at(3).outcome]).toEqual(['skipped', 'skipped']);
  });
});
