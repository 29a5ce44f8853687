import type { Palette } from './chart-palette.ts';

export interface PngPart {
  title: string;
  canvas: HTMLCanvasElement;
  caption: string;
}

const MARGIN = 16;
const TITLE_LINE = 24;
const CAPTION_LINE = 18;

function wrap(ctx: CanvasRenderingContext2D, text: string, width: number): string[] {
  const lines: string[] = [];
  let line = '';
  for (const word of text.split(/\s+/).filter(Boolean)) {
    const longer = line === '' ? word : `${line} ${word}`;
    if (line !== '' && ctx.measureText(longer).width > width) {
      lines.push(line);
      line = word;
    } else line = longer;
  }
  return line === '' ? lines : [...lines, line];
}

/** One PNG of pictures above each other, each with title and caption, and a last line of words. */
export async function pngOf(
  parts: readonly PngPart[],
  foot: string,
  palette: Palette,
  scale: number,
): Promise<Blob> {
  const canvas = document.createElement('canvas');
  const ctx = canvas.getContext('2d')!;
  const width = Math.max(...parts.map((part) => part.canvas.width)) / scale;
  const captionFont = `13px ${palette.font}`;
  ctx.font = captionFont;
  const blocks = parts.map((part) => ({ ...part, lines: wrap(ctx, part.caption, width) }));
  const footLines = wrap(ctx, foot, width);
  const height =
    blocks.reduce(
      (sum, part) =>
        sum + TITLE_LINE + part.canvas.height / scale + part.lines.length * CAPTION_LINE + MARGIN,
      MARGIN,
    ) +
    footLines.length * CAPTION_LINE;

  canvas.width = (width + 2 * MARGIN) * scale;
  canvas.height = (height + MARGIN) * scale;
  ctx.scale(scale, scale);
  ctx.fillStyle = palette.paper;
  ctx.fillRect(0, 0, canvas.width, canvas.height);
  ctx.textBaseline = 'top';
  let top = MARGIN;
  const write = (lines: readonly string[]) => {
    ctx.font = captionFont;
    ctx.fillStyle = palette.soft;
    for (const line of lines) {
      ctx.fillText(line, MARGIN, top);
      top += CAPTION_LINE;
    }
  };
  for (const part of blocks) {
    ctx.font = `600 15px ${palette.font}`;
    ctx.fillStyle = palette.ink;
    ctx.fillText(part.title, MARGIN, top);
    top += TITLE_LINE;
    ctx.drawImage(part.canvas, MARGIN, top, part.canvas.width / scale, part.canvas.height / scale);
    top += part.canvas.height / scale;
    write(part.lines);
    top += MARGIN;
  }
  write(footLines);
  return new Promise((resolve, reject) => {
    canvas.toBlob(
      (blob) => (blob === null ? reject(new Error('The browser could not make the PNG.')) : resolve(blob)),
      'image/png',
    );
  });
}
