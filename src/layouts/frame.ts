/** A word of the bar. `active` overrides the rule that a word is active on its own path and everything below it. */
export interface FrameLink {
  label: string;
  to: string;
  count?: number;
  active?: boolean;
}

export interface FrameSite {
  id: string;
  name: string;
}

export interface FramePerson {
  name: string;
  role: string;
}

export function isActive(link: FrameLink, path: string): boolean {
  if (link.active !== undefined) return link.active;
  const own = link.to.split(/[?#]/)[0] ?? '';
  return path === own || (own !== '/' && path.startsWith(`${own}/`));
}
