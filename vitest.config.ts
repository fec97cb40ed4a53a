import { fileURLToPath } from 'node:url'
import { defineVitestProject } from '@nuxt/test-utils/config'
import { defineConfig } from 'vitest/config'

const path = (relative: string) => fileURLToPath(new URL(relative, import.meta.url))

const alias = { '#shared': path('./shared'), '~~': path('.'), '~': path('./app') }
const setupFiles = [path('./tests/helpers/matchers.ts')]

/** A plain Node project over one folder of tests. */
const plain = (name: string, timeout = 20_000) => ({
  resolve: { alias },
  test: { name, include: [`tests/${name}/**/*.spec.ts`], environment: 'node', setupFiles, testTimeout: timeout, hookTimeout: timeout * 3 },
})

export default defineConfig({
  test: {
    projects: [
      plain('unit'),
      plain('reference'),
      { ...plain('api', 60_000) },
      { ...plain('browser', 120_000) },
      { ...plain('long', 600_000) },
      await defineVitestProject({
        test: {
          name: 'component',
          include: ['tests/component/**/*.spec.ts'],
          environment: 'nuxt',
          environmentOptions: { nuxt: { domEnvironment: 'happy-dom', overrides: { auth: { isEnabled: false } } } },
        },
      }),
    ],
  },
})
