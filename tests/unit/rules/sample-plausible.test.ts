import { describe, expect, it } from 'vitest';
import { farFromLast, unitThatFits } from '../../../shared/rules/sample-plausible.ts';
import { autoregression, seededRandom } from '../../trials/seeded-random.ts';

const around = (level: number, count = 30) =>
  Array.from({ length: count }, (_, i) => level + ((i * 7) % 11) - 5);

describe('far from the last results', () => {
  it('is beyond six robust standard deviations of the median, and never within R of it', () => {
    // Median 1,470 and median absolute deviation 2, so six times 1.4826 × 2 = 17.79 away; the last five lie at 1,470.
    const last = [...around(1470, 22), ...around(1470, 5).fill(1470)];
    expect(farFromLast(1487.7, last, null)).toBe(false);
    expect(farFromLast(1487.9, last, null)).toBe(true);
    expect(farFromLast(1452.1, last, null)).toBe(true);
    expect(farFromLast(1509, last, 40)).toBe(false);
    expect(farFromLast(1511, last, 40)).toBe(true);
  });

  it('is not judged on fewer than eight, nor where these say nothing of their spread', () => {
    expect(farFromLast(9999, around(1470, 7), null)).toBe(false);
    expect(farFromLast(9999, Array(30).fill(1470), null)).toBe(false);
    expect(farFromLast(9999, Array(30).fill(1470), 5)).toBe(true);
  });

  it('does not let one wrong result among the last widen it', () => {
    expect(farFromLast(2678, [...around(1470, 29), 2678], null)).toBe(true);
  });

  it('accepts a new level after two of the last five at it', () => {
    const moved = (count: number) => [...around(1470, 28), ...around(1540, count)];
    expect(farFromLast(1541, moved(1), null)).toBe(true);
    expect(farFromLast(1541, moved(2), null)).toBe(false);
    expect(farFromLast(1300, moved(2), null)).toBe(true);
  });

  it.each([0, 0.9])(
    'holds fewer than one in a thousand of a healthy process with lag-1 correlation %d',
    (phi) => {
      const random = seededRandom(41);
      let far = 0;
      for (let trial = 0; trial < 5000; trial++) {
        const values = [...autoregression(random, 31, phi)];
        if (farFromLast(values.at(-1)!, values.slice(0, 30), null)) far += 1;
      }
      expect(far).toBeLessThan(5);
    },
  );
});

it('a unit explains a result where it brings it among the last', () => {
  const isFar = (level: number) => (value: number) => farFromLast(value, around(level), null);
  expect(unitThatFits(2678, '°C', isFar(1470))).toBe('°F');
  expect(unitThatFits(1743, '°C', isFar(1470))).toBe('K');
  expect(unitThatFits(1600, '°C', isFar(1470))).toBeNull();
  expect(unitThatFits(-999, '°C', isFar(1470))).toBeNull();
  expect(unitThatFits(250_000, '%', (value) => Math.abs(value - 25) > 1)).toBe('ppm');
});
