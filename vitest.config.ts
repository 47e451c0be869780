import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url));
const clientFolders = '{app,components,hooks,lib,constants}';

/** Three projects: what runs in Node.js, what runs in a simulated DOM, and the journeys in a real browser. */
export default defineConfig({
  test: {
    projects: [
      {
        test: {
          name: 'node',
          environment: 'node',
          include: ['tests/{shared,published,broker,server,simulators,scripts,system}/**/*.test.ts'],
          testTimeout: 30_000,
          hookTimeout: 30_000,
        },
      },
      {
        define: { __DEV__: 'true' },
        resolve: {
          alias: {
            'react-native': here('./node_modules/react-native-web'),
            // Its main file is CommonJS, whose own requires know nothing of the alias above.
            'react-native-svg': here('./node_modules/react-native-svg/lib/module/index.js'),
          },
          extensions: ['.web.tsx', '.web.ts', '.web.js', '.tsx', '.ts', '.mjs', '.js', '.json'],
        },
        test: {
          name: 'client',
          environment: 'jsdom',
          include: [`tests/${clientFolders}/**/*.test.{ts,tsx}`],
          setupFiles: ['tests/helpers/client-setup.ts'],
          server: { deps: { inline: [/react-native/, /expo/] } },
        },
      },
      {
        test: {
          name: 'e2e',
          environment: 'node',
          include: ['tests/e2e/**/*.test.ts'],
          testTimeout: 180_000,
          hookTimeout: 300_000,
          // Each journey has a server, a browser and devices of its own; they mostly wait.
          maxWorkers: 2,
        },
      },
    ],
  },
});
