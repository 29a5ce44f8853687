import { afterEach, describe, expect, test } from 'vitest';
import ErrorStrip from '../../src/components/charts/ErrorStrip.vue';
import { layStrip } from '../../src/components/charts/strip-layout.ts';
import { mountPart } from './mount-part.ts';

afterEach(() => (document.body.innerHTML = ''));

const errors = (...ratios: number[]) => ratios.map((ratio) => ({ ratio }));
const flat = (count: number, ratio = 0) => Array.from({ length: count }, () => ({ ratio }));

describe('the layout of an error strip', () => {
  test('puts the newest error at the right and leaves the left empty while there are few', () => {
    const { marks } = layStrip(errors(0.1, 0.2, 0.3), 200, 32);
    expect(marks.map(({ x }) => x)).toEqual([175, 185, 195]);
  });

  test('keeps the last 20 errors only', () => {
    const { marks } = layStrip([...flat(5, 1.5), ...flat(20, 0)], 200, 32);
    expect(marks).toHaveLength(20);
    expect(marks.every(({ y }) => y === 16)).toBe(true);
    expect(marks[0]!.x).toBe(5);
  });

  test('draws −2 to +2 allowed errors, high above low, symmetric about zero', () => {
    const { marks, y } = layStrip(errors(2, 1, 0, -1, -2), 200, 32);
    const heights = marks.map((mark) => mark.y);
    expect(heights).toEqual([...heights].sort((a, b) => a - b));
    expect(heights[2]).toBe(16);
    expect(y(1) + y(-1)).toBe(32);
    expect(16 - y(2)).toBe(2 * (16 - y(1)));
    expect(marks.every(({ beyond }) => beyond === null)).toBe(true);
  });

  test('holds errors beyond twice the allowed at the edge with a caret', () => {
    const { marks, y } = layStrip(errors(2.01, 40, -3), 200, 32);
    expect(marks.map(({ beyond }) => beyond)).toEqual(['above', 'above', 'below']);
    expect(marks.map((mark) => mark.y)).toEqual([y(2), y(2), y(-2)]);
  });

  test('leaves a gap at a recalibration, in the points and in the band', () => {
    const list = flat(20).map((error, index) => ({ ...error, recalibratedBefore: index === 12 }));
    const { marks, stretches } = layStrip(list, 210, 32);
    const steps = marks.slice(1).map(({ x }, index) => Math.round(x - marks[index]!.x));
    expect(steps.map((step, index) => (index === 11 ? step === 20 : step === 10))).not.toContain(false);
    expect(stretches).toHaveLength(2);
    expect(stretches[0]!.to).toBeLessThan(stretches[1]!.from);
    expect(marks[11]!.x).toBeLessThan(stretches[0]!.to);
    expect(marks[12]!.x).toBeGreaterThan(stretches[1]!.from);
  });
});

describe('an error strip', () => {
  test('draws a dot for each error inside and a caret for each beyond', () => {
    const strip = mountPart(ErrorStrip, { props: { errors: errors(0, 0.5, 2.5, -2.5) } });
    expect(strip.findAll('circle')).toHaveLength(2);
    expect(strip.findAll('path.caret')).toHaveLength(2);
  });

  test('says in words how many errors are inside, above and below, and the newest', () => {
    const strip = mountPart(ErrorStrip, { props: { errors: errors(0, -1.2, 1.5, 2.14), name: 'TY-1402' } });
    expect(strip.get('[role=img]').attributes('aria-label')).toBe(
      'Last 4 errors of TY-1402: 1 inside the allowed error, 2 above it, 1 below it; newest 2.1 times the allowed error high.',
    );
  });

  test('says that there is no error yet', () => {
    const strip = mountPart(ErrorStrip, { props: { errors: [] } });
    expect(strip.get('[role=img]').attributes('aria-label')).toBe('No errors yet.');
  });
});
