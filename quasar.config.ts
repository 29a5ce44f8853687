import type { QuasarPluginOpts } from '@quasar/vite-plugin';
import { Dialog, Notify, type QuasarPluginOptions } from 'quasar';
import lang from 'quasar/lang/en-US.js';
import iconSet from 'quasar/icon-set/svg-material-icons.js';

/** Build time: read by vite.config.ts. */
export const quasarVite: QuasarPluginOpts = { sassVariables: false, autoImportComponentCase: 'kebab' };

/** Run time: read by src/main.ts. Colours themselves live in src/css/tokens.css. */
export const quasarUi: Partial<QuasarPluginOptions> = {
  plugins: { Dialog, Notify },
  iconSet,
  lang,
  config: { dark: 'auto', notify: { position: 'bottom', timeout: 6000 } },
};
