// Provides one thing for the project in a folder, as the scripts do: `packages FOLDER` or `build FOLDER PART…`.
import { build } from '../../server/start/build.mjs';
import { runScript } from '../../server/start/ending.mjs';
import { providePackages } from '../../server/start/packages.mjs';

await runScript(async () => {
  const [what, folder, ...parts] = process.argv.slice(2);
  if (what === 'packages') await providePackages(folder);
  else await build(folder, ...parts);
  return 0;
});
