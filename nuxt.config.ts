import { cpSync, readdirSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { requireContract } from './scripts/build/contract-check'
import { workerEntries } from './scripts/build/worker-entries'

const path = (relative: string) => fileURLToPath(new URL(relative, import.meta.url))

/** The TTF files that the memo embeds; pdfmake opens fonts by path. */
const MEMO_FONTS: Record<string, RegExp> = {
  'source-sans': /^SourceSans3-(Regular|Semibold|It|SemiboldIt)\.ttf$/,
  'source-serif': /^SourceSerif4-(Regular|Semibold)\.ttf$/,
  'source-code-pro': /^SourceCodePro-Regular\.ttf$/,
}

function copyRuntimeFiles(serverDir: string) {
  cpSync(path('./drizzle'), `${serverDir}/drizzle`, { recursive: true })
  for (const [name, pattern] of Object.entries(MEMO_FONTS)) {
    const folder = path(`./node_modules/${name}/TTF`)
    for (const file of readdirSync(folder).filter(candidate => pattern.test(candidate))) {
      cpSync(`${folder}/${file}`, `${serverDir}/fonts/${file}`)
    }
  }
}

export default defineNuxtConfig({
  modules: ['@pinia/nuxt', '@nuxtjs/tailwindcss', '@nuxtjs/i18n', '@sidebase/nuxt-auth', 'nuxt-security', '@nuxt/eslint'],

  imports: {
    presets: [{ from: 'vee-validate', imports: ['useForm', 'useField', 'useFieldArray', 'useFieldValue'] }],
  },
  devtools: { enabled: false },

  app: {
    head: {
      htmlAttrs: { lang: 'en' },
      titleTemplate: '%s · Stipule',
      link: [{ rel: 'icon', type: 'image/svg+xml', href: '/mark.svg' }],
      meta: [{ name: 'viewport', content: 'width=device-width, initial-scale=1' }],
    },
  },
  css: [
    '@fontsource/source-sans-3/400.css', '@fontsource/source-sans-3/600.css',
    '@fontsource/source-serif-4/400.css', '@fontsource/source-serif-4/600.css',
    '@fontsource/source-code-pro/400.css',
  ],
  compatibilityDate: '2026-11-01',

  nitro: {
    inlineDynamicImports: false, // the dev preset's `true` would run worker and migration inside the dev server
    esbuild: { options: { target: 'es2022' } },
    rollupConfig: {
      output: { manualChunks: () => undefined }, // else a worker would start the whole application
      plugins: [workerEntries({
        'worker.mjs': path('./server/workers/jobs.ts'),
        'migrate.mjs': path('./server/workers/migrate.ts'),
        'seed.mjs': path('./server/cli/seed.ts'),
        'check.mjs': path('./server/cli/check.ts'),
        'mail-sink.mjs': path('./server/cli/mailSink.ts'),
      })],
    },
    hooks: {
      'rollup:before'(nitro) {
        requireContract(nitro)
      },
      compiled(nitro) {
        if (!nitro.options.dev) copyRuntimeFiles(nitro.options.output.serverDir)
      },
    },
  },
  vite: { build: { assetsInlineLimit: 0 } }, // small fonts would become data: addresses, which the content security policy refuses
  typescript: {
    strict: true,
    tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } },
  },
  telemetry: false,

  hooks: {
    'nitro:config'(config) {
      // Problems for the interface come first; pages keep the error page that Nuxt renders.
      config.errorHandler = [path('./server/error.ts'), config.errorHandler ?? []].flat()
    },
  },

  auth: {
    originEnvKey: 'AUTH_ORIGIN',
    provider: { type: 'authjs' },
    globalAppMiddleware: true,
    sessionRefresh: { enablePeriodically: false, enableOnWindowFocus: false },
  },

  eslint: { config: { stylistic: { quotes: 'single', semi: false, commaDangle: 'always-multiline' } } },

  i18n: {
    strategy: 'no_prefix',
    defaultLocale: 'en',
    detectBrowserLanguage: false,
    locales: [{ code: 'en', language: 'en-GB', name: 'English' }],
    vueI18n: path('./app/i18n.config.ts'),
  },

  security: {
    corsHandler: false,
    rateLimiter: false, // sign-in has its own, on the database, so that it holds across processes
    requestSizeLimiter: false, // each operation states its own limit
    xssValidator: false, // it rewrites bodies; ours are parsed by strict schemas
    headers: {
      strictTransportSecurity: false, // set by the proxy that terminates TLS
      crossOriginEmbedderPolicy: 'require-corp',
      contentSecurityPolicy: {
        'base-uri': ['\'none\''],
        'default-src': ['\'self\''],
        'font-src': ['\'self\''],
        'img-src': ['\'self\'', 'data:', 'blob:'],
        'style-src': ['\'self\'', '\'unsafe-inline\''],
        'script-src': ['\'self\'', '\'strict-dynamic\'', '\'nonce-{{nonce}}\''],
        'connect-src': ['\'self\''],
        'object-src': ['\'none\''],
        'frame-ancestors': ['\'none\''],
        'form-action': ['\'self\''],
        'upgrade-insecure-requests': false,
      },
    },
  },
  tailwindcss: { cssPath: '~/assets/css/tailwind.css', viewer: false },
})
