import { type Paint, darkStyles, paints } from './colours.ts';

/** A message as it is handed to the mail server: the same words as HTML and as plain text. */
export interface Body {
  subject: string;
  text: string;
  html: string;
}

/** One thing a person is told: a sentence that links to its page, and what is known of it below. */
export interface LetterLine {
  sentence: string;
  link: string;
  detail: string;
}

/** The parts of a letter in their order; each is written as HTML and as plain text. */
export type Part =
  | { part: 'paragraph'; text: string }
  | { part: 'action'; label: string; link: string }
  | { part: 'list'; title: string; lines: LetterLine[] }
  | { part: 'small'; text: string };

/** Writes a letter as HTML and plain text from the same parts. Whatever people typed is escaped. */
export function writeLetter(subject: string, parts: readonly Part[]): Body {
  return {
    subject,
    text: `${parts.map(plain).join('\n\n')}\n`,
    html: page(subject, parts.map(html).join('')),
  };
}

function plain(part: Part): string {
  switch (part.part) {
    case 'action':
      return `${part.label}:\n${part.link}`;
    case 'list':
      return [
        part.title.toUpperCase(),
        ...part.lines.map(({ sentence, link, detail }) =>
          [`- ${sentence}`, ...(detail ? [`  ${detail}`] : []), `  ${link}`].join('\n'),
        ),
      ].join('\n\n');
    default:
      return part.text;
  }
}

function html(part: Part): string {
  switch (part.part) {
    case 'paragraph':
      return `<p ${paint('ink')} style="margin:0 0 16px;color:${paints.ink.light}">${escapeHtml(part.text)}</p>`;
    case 'action':
      return (
        `<p style="margin:24px 0"><a ${paint('button')} href="${escapeHtml(part.link)}" style="display:inline-block;` +
        `padding:12px 20px;border-radius:6px;background:${paints.iron.light};color:${paints.card.light};` +
        `font-weight:600;text-decoration:none">${escapeHtml(part.label)}</a></p>`
      );
    case 'list':
      return (
        `<h2 ${paint('rule')} style="margin:24px 0 0;padding:0 0 8px;border-bottom:1px solid ${paints.edge.light};` +
        `color:${paints.ink.light};font-size:16px;line-height:24px;font-weight:600">${escapeHtml(part.title)}</h2>` +
        part.lines.map(line).join('')
      );
    case 'small':
      return (
        `<p ${paint('soft')} style="margin:24px 0 0;color:${paints.soft.light};font-size:14px;line-height:20px">` +
        `${escapeHtml(part.text)}</p>`
      );
  }
}

function line({ sentence, link, detail }: LetterLine): string {
  return (
    `<div ${paint('row')} style="padding:12px 0;border-bottom:1px solid ${paints.line.light}">` +
    `<a ${paint('link')} href="${escapeHtml(link)}" style="color:${paints.iron.light};font-weight:600">${escapeHtml(sentence)}</a>` +
    (detail
      ? `<div ${paint('soft')} style="margin:4px 0 0;color:${paints.soft.light};font-size:14px;line-height:20px">${escapeHtml(detail)}</div>`
      : '') +
    '</div>'
  );
}

/** Mail programs keep what is written at the element; the style block only repaints for dark screens. */
const page = (title: string, content: string): string =>
  '<!doctype html><html lang="en"><head><meta charset="utf-8">' +
  '<meta name="viewport" content="width=device-width, initial-scale=1">' +
  '<meta name="color-scheme" content="light dark"><meta name="supported-color-schemes" content="light dark">' +
  `<title>${escapeHtml(title)}</title><style>${darkStyles}</style></head>` +
  `<body ${paint('paper')} style="margin:0;padding:0;background:${paints.paper.light};color:${paints.ink.light};` +
  `font:16px/24px 'Noto Sans',Verdana,sans-serif;-webkit-text-size-adjust:100%">` +
  `<div style="max-width:560px;margin:0 auto;padding:24px 16px;overflow-wrap:anywhere">${content}</div></body></html>`;

const paint = (name: Paint): string => `class="${name}"`;

const signs: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' };
const escapeHtml = (text: string): string => text.replace(/[&<>"']/g, (sign) => signs[sign]!);
