import type { Palette } from './chart-palette.ts';
import { BLOCKS_HEIGHT, BLOCKS_WIDTH, type MonthLayout } from './month-layout.ts';

const SCALE = 2;
const MARGIN = 16;
const TITLE = 28;
const NAME = 22;
const COLUMNS = 3;

interface Picture {
  site: string;
  layout: MonthLayout;
}

function drawBlocks(ctx: CanvasRenderingContext2D, { layout }: Picture, palette: Palette) {
  for (const { x, y, width, height, health } of layout.blocks) {
    if (health === 'unfit') {
      ctx.fillStyle = palette.unfit;
      ctx.fillRect(x, y, width, height);
    } else {
      ctx.strokeStyle = palette.soft;
      ctx.setLineDash([2, 1.5]);
      ctx.strokeRect(x + 0.5, y + 0.5, width - 1, Math.max(1, height - 1));
      ctx.setLineDash([]);
    }
  }
  ctx.fillStyle = palette.edge;
  ctx.fillRect(0, layout.base, BLOCKS_WIDTH, 1);
  ctx.font = `12px ${palette.font}`;
  ctx.fillStyle = palette.soft;
  ctx.textAlign = 'center';
  for (const { x, letter } of layout.letters) ctx.fillText(letter, x, BLOCKS_HEIGHT - 15);
  ctx.textAlign = 'left';
}

/** The sites' months as one PNG, three beside each other. */
export async function monthsPng(
  title: string,
  caption: string,
  pictures: readonly Picture[],
  palette: Palette,
): Promise<Blob> {
  const rows = Math.ceil(pictures.length / COLUMNS);
  const [cellWidth, cellHeight] = [BLOCKS_WIDTH + 2 * MARGIN, NAME + BLOCKS_HEIGHT + MARGIN];
  const canvas = document.createElement('canvas');
  canvas.width = (Math.min(COLUMNS, Math.max(2, pictures.length)) * cellWidth + MARGIN) * SCALE;
  canvas.height = (MARGIN + TITLE + rows * cellHeight + NAME) * SCALE;
  const ctx = canvas.getContext('2d')!;
  ctx.scale(SCALE, SCALE);
  ctx.fillStyle = palette.paper;
  ctx.fillRect(0, 0, canvas.width, canvas.height);
  ctx.textBaseline = 'top';
  ctx.fillStyle = palette.ink;
  ctx.font = `600 15px ${palette.font}`;
  ctx.fillText(title, MARGIN, MARGIN);
  pictures.forEach((picture, index) => {
    ctx.save();
    ctx.translate(
      MARGIN + (index % COLUMNS) * cellWidth,
      MARGIN + TITLE + Math.floor(index / COLUMNS) * cellHeight,
    );
    ctx.fillStyle = palette.ink;
    ctx.font = `600 14px ${palette.font}`;
    ctx.fillText(picture.site, 0, 0);
    ctx.translate(0, NAME);
    drawBlocks(ctx, picture, palette);
    ctx.restore();
  });
  ctx.font = `12px ${palette.font}`;
  ctx.fillStyle = palette.soft;
  ctx.fillText(caption, MARGIN, MARGIN + TITLE + rows * cellHeight - 4);
  return new Promise((resolve, reject) => {
    canvas.toBlob(
      (blob) => (blob === null ? reject(new Error('The browser could not make the PNG.')) : resolve(blob)),
      'image/png',
    );
  });
}
