import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';

const css = readFileSync(new URL('../../src/css/tokens.css', import.meta.url), 'utf8');
const tokens = new Map(
  [...css.matchAll(/--([\w-]+): light-dark\((#[0-9a-f]{6}), (#[0-9a-f]{6})\)/g)].map(
    ([, name, light, dark]) => [name!, { light: light!, dark: dark! }] as const,
  ),
);

// Relative luminance and contrast ratio: WCAG 2.2, definitions in section 8.
function luminance(hex: string): number {
  const [red, green, blue] = [1, 3, 5].map((at) => {
    const channel = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
    return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
  });
  return 0.2126 * red! + 0.7152 * green! + 0.0722 * blue!;
}

function contrast(a: string, b: string): number {
  const [light, dark] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (light! + 0.05) / (dark! + 0.05);
}

function colour(name: string, side: 'light' | 'dark'): string {
  const token = tokens.get(name);
  if (token === undefined) throw new Error(`tokens.css has no colour --${name}`);
  return token[side];
}

describe.each(['light', 'dark'] as const)('colours on the %s side', (side) => {
  const texts = ['ink', 'soft', 'iron'].flatMap((text) =>
    ['paper', 'card', 'bar'].map((ground) => [text, ground]),
  );
  test.each([...texts, ['on-iron', 'iron'], ['ink', 'allowed'], ['soft', 'allowed'], ['ink', 'band']])(
    'text --%s on --%s passes WCAG AA (4.5 to 1)',
    (text, ground) => {
      expect(contrast(colour(text!, side), colour(ground!, side))).toBeGreaterThanOrEqual(4.5);
    },
  );

  const marks = ['edge', 'watch', 'unfit', 'estimate'].flatMap((mark) =>
    ['paper', 'card'].map((ground) => [mark, ground]),
  );
  test.each(marks)('the mark or border --%s on --%s passes WCAG AA for graphics (3 to 1)', (mark, ground) => {
    expect(contrast(colour(mark!, side), colour(ground!, side))).toBeGreaterThanOrEqual(3);
  });
});

test('the contrast of black on white is 21 to 1', () => {
  // WCAG 2.2: the ratio ranges from 1 to 21.
  expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 10);
});
