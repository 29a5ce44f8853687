const TOKENS = ['paper', 'line', 'edge', 'ink', 'soft', 'estimate', 'band', 'allowed', 'unfit'] as const;

export type Palette = Record<(typeof TOKENS)[number], string> & { font: string };

/**
 * The tokens' colours as a canvas understands them, at this moment's theme; for paper with `onPaper`.
 * A probe is needed: a custom property read as such may still be a light-dark() expression.
 */
export function readPalette(onPaper = false): Palette {
  const root = document.documentElement;
  root.classList.toggle('as-on-paper', onPaper);
  const probe = document.createElement('span');
  root.append(probe);
  const colours = TOKENS.map((token) => {
    probe.style.color = `var(--${token})`;
    return [token, getComputedStyle(probe).color] as const;
  });
  const font = getComputedStyle(root).getPropertyValue('--font').trim() || 'sans-serif';
  probe.remove();
  root.classList.remove('as-on-paper');
  return { ...(Object.fromEntries(colours) as Record<(typeof TOKENS)[number], string>), font };
}
