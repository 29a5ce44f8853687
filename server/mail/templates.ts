import type { Letter } from './transport.ts';

type Body = Pick<Letter, 'subject' | 'text' | 'html'>;

export interface LinkFigures {
  name: string;
  hours: number;
}

/** Mails with a one-time link: to set a first password or a new one. */
export function linkLetter(
  purpose: 'set-password' | 'reset-password',
  figures: LinkFigures,
  link: string,
): Body {
  const first = purpose === 'set-password';
  const lasts = figures.hours >= 48 ? `${figures.hours / 24} days` : `${figures.hours} hours`;
  return compose({
    subject: first ? 'Set your password for Cupel' : 'Set a new password for Cupel',
    greeting: `Hello ${figures.name},`,
    paragraphs: [
      first
        ? 'an administrator has added you to Cupel, the register of soft sensors. Set your password to sign in.'
        : 'somebody asked for a new password for this address. If it was not you, ignore this mail: nothing changes.',
    ],
    action: { label: first ? 'Set your password' : 'Set a new password', link },
    closing: `The link works once, for ${lasts}.`,
  });
}

interface Parts {
  subject: string;
  greeting: string;
  paragraphs: string[];
  action: { label: string; link: string };
  closing: string;
}

function compose(parts: Parts): Body {
  const text = [
    parts.greeting,
    ...parts.paragraphs,
    `${parts.action.label}:\n${parts.action.link}`,
    parts.closing,
  ].join('\n\n');
  const paragraph = (inner: string) => `<p style="margin:0 0 16px">${inner}</p>`;
  const html =
    '<!doctype html><html lang="en"><body style="margin:0;background:#F6F3EC;color:#22282B;' +
    'font:16px/24px \'Noto Sans\',Verdana,sans-serif"><div style="max-width:560px;margin:0 auto;padding:24px">' +
    [parts.greeting, ...parts.paragraphs].map((line) => paragraph(escapeHtml(line))).join('') +
    paragraph(
      `<a href="${escapeHtml(parts.action.link)}" style="display:inline-block;padding:12px 20px;border-radius:6px;` +
        `background:#24414D;color:#FFFDF9;text-decoration:none">${escapeHtml(parts.action.label)}</a>`,
    ) +
    `<p style="margin:0;color:#5E625D;font-size:14px;line-height:20px">${escapeHtml(parts.closing)}</p>` +
    '</div></body></html>';
  return { subject: parts.subject, text, html };
}

const escapeHtml = (text: string) =>
  text.replace(
    /[&<>"']/g,
    (sign) => ({ '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' })[sign]!,
  );
