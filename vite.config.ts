import { quasar, transformAssetUrls } from '@quasar/vite-plugin';
import vue from '@vitejs/plugin-vue';
import type { Plugin } from 'vite';
import { defineConfig } from 'vitest/config';
import { quasarVite } from './quasar.config.ts';
import type { EndpointSpec } from './shared/contracts/endpoint.ts';
import { endpoints } from './shared/contracts/index.ts';

const devServerPort = Number(process.env.PORT ?? 4600);
/**
 * The client needs of the endpoint table only where each endpoint is; its schemas, and the library that runs them, stay
 * out of the first load.
 */
function endpointAddresses(): Plugin {
  const id = 'virtual:endpoint-addresses';
  const addresses = Object.entries(endpoints as Record<string, EndpointSpec>).map(([name, spec]) => [
    name,
    [spec.method, spec.path, spec.body !== undefined],
  ]);
  return {
    name: 'cupel-endpoint-addresses',
    resolveId: (wanted) => (wanted === id ? `\0${id}` : undefined),
    load: (wanted) =>
      wanted === `\0${id}` ? `export default ${JSON.stringify(Object.fromEntries(addresses))}` : undefined,
  };
}

const plugins = () => [endpointAddresses(), vue({ template: { transformAssetUrls } }), quasar(quasarVite)];

export default defineConfig(({ isSsrBuild }) => ({
  plugins: plugins(),
  // The Host header stays, or the server would take our own page for a foreign one.
  server: { proxy: { '/api': { target: `http://127.0.0.1:${devServerPort}`, changeOrigin: false } } },
  build: isSsrBuild
    ? {
        target: 'node20',
        sourcemap: true,
        rollupOptions: {
          input: { main: 'server/main.ts', 'estimate-worker': 'server/jobs/estimate-worker.ts' },
        },
      }
    : { outDir: 'dist/client', target: 'es2022', manifest: true },
  test: {
    reporters: ['default', './tests/support/plain-reporter.ts'],
    maxWorkers: 2,
    projects: [
      {
        test: {
          name: 'unit',
          include: ['tests/unit/**/*.test.ts', 'tests/reference/**/*.test.ts', 'tests/*.test.ts'],
        },
      },
      {
        plugins: plugins(),
        test: { name: 'client', environment: 'happy-dom', include: ['tests/client/**/*.test.ts'] },
      },
      {
        test: {
          name: 'api',
          include: ['tests/api/**/*.test.ts'],
          globalSetup: ['tests/support/template-database.ts'],
          testTimeout: 30_000,
          hookTimeout: 60_000,
        },
      },
      {
        test: {
          name: 'start',
          include: ['tests/start/**/*.test.ts'],
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        test: {
          name: 'e2e',
          include: ['tests/e2e/**/*.test.ts'],
          globalSetup: ['tests/support/template-database.ts'],
          testTimeout: 120_000,
          hookTimeout: 120_000,
        },
      },
    ],
  },
}));
