/** Our colours on light and dark ground, as in the client's tokens; mail programs know no variables. */
export const paints = {
  paper: { light: '#f6f3ec', dark: '#15191a' },
  card: { light: '#fffdf9', dark: '#1c2122' },
  line: { light: '#ded7c7', dark: '#3a4143' },
  edge: { light: '#7c7d75', dark: '#7a817d' },
  ink: { light: '#22282b', dark: '#e9e6de' },
  soft: { light: '#5e625d', dark: '#b4b5ac' },
  iron: { light: '#24414d', dark: '#8fc3d4' },
} as const;

const rules = {
  paper: `background:${paints.paper.dark}!important;color:${paints.ink.dark}!important`,
  ink: `color:${paints.ink.dark}!important`,
  soft: `color:${paints.soft.dark}!important`,
  link: `color:${paints.iron.dark}!important`,
  button: `background:${paints.iron.dark}!important;color:${paints.paper.dark}!important`,
  rule: `color:${paints.ink.dark}!important;border-color:${paints.edge.dark}!important`,
  row: `border-color:${paints.line.dark}!important`,
};
export type Paint = keyof typeof rules;

/** Repaints a letter on a dark screen, for mail programs that read a style block. */
export const darkStyles = `:root{color-scheme:light dark}@media (prefers-color-scheme:dark){${Object.entries(
  rules,
)
  .map(([name, rule]) => `.${name}{${rule}}`)
  .join('')}}`;
