import { fileURLToPath } from 'node:url';
import { defineConfig, type TestProjectInlineConfiguration } from 'vitest/config';

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url));

/** Client code outside a browser: pure parts in Node.js (`.test.ts`), components in a simulated DOM (`.test.tsx`), which is slow to set up. */
function clientProject(name: string, environment: 'node' | 'jsdom', ending: 'ts' | 'tsx'): TestProjectInlineConfiguration {
  return {
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
      name,
      environment,
      include: [`tests/{app,components,hooks,lib,constants}/**/*.test.${ending}`],
      setupFiles: environment === 'jsdom' ? ['tests/helpers/client-setup.ts'] : [],
      server: { deps: { inline: [/react-native/, /expo/] } },
      testTimeout: 20_000,
    },
  };
}

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
      clientProject('client', 'node', 'ts'),
      clientProject('dom', 'jsdom', 'tsx'),
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
