import { afterEach, describe, expect, test } from 'vitest';
import HealthMark from '../../src/components/base/HealthMark.vue';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

// The geometry is the project's own design: rails of the allowed error and the bead, on 16 × 16.
describe('a health mark', () => {
  test.each([
    ['fit', 'Fit', [4, 12], 1.25, { y: 8, r: 2 }],
    ['watch', 'Watch', [5, 13], 1.75, { y: 5, r: 3.5 }],
    ['unfit', 'Unfit', [9.5, 14.5], 2.25, { y: 3.75, r: 3.5 }],
  ])(
    'of "%s" has full-width rails, its bead at x 12 and the word beside it',
    (health, word, rails, width, bead) => {
      const mark = mountPart(HealthMark, { props: { health } });
      const lines = mark.findAll('line');
      expect(mark.get('svg').attributes('viewBox')).toBe('0 0 16 16');
      expect(lines.map((line) => Number(line.attributes('y1')))).toEqual(rails);
      for (const line of lines) {
        expect(line.attributes()).toMatchObject({ x1: '0', x2: '16', 'stroke-width': String(width) });
        expect(line.attributes('y2')).toBe(line.attributes('y1'));
        expect(line.attributes('stroke-dasharray')).toBeUndefined();
      }
      expect(mark.get('circle').attributes()).toMatchObject({
        cx: '12',
        cy: String(bead.y),
        r: String(bead.r),
      });
      expect(mark.text()).toBe(word);
    },
  );

  test('of "unproven" has dashed rails and no bead', () => {
    const mark = mountPart(HealthMark, { props: { health: 'unproven' } });
    const lines = mark.findAll('line');
    expect(lines.map((line) => Number(line.attributes('y1')))).toEqual([4, 12]);
    expect(lines.every((line) => line.attributes('stroke-dasharray') !== undefined)).toBe(true);
    expect(mark.find('circle').exists()).toBe(false);
    expect(mark.text()).toBe('Unproven');
  });

  test('differs in shape for each health, so that colour is never needed', () => {
    const shapes = ['fit', 'watch', 'unfit', 'unproven'].map((health) =>
      mountPart(HealthMark, { props: { health } }).get('svg').html(),
    );
    expect(new Set(shapes).size).toBe(4);
  });

  test('leaves its word out where the word already stands, and takes other words', () => {
    expect(mountPart(HealthMark, { props: { health: 'fit', word: false } }).text()).toBe('');
    expect(mountPart(HealthMark, { props: { health: 'unfit', word: 'Unfit.' } }).text()).toBe('Unfit.');
  });

  test('is silent for screen readers: the word speaks', () => {
    expect(
      mountPart(HealthMark, { props: { health: 'watch' } })
        .get('svg')
        .attributes('aria-hidden'),
    ).toBe('true');
  });
});
