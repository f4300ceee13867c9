export default defineNuxtConfig({
  compatibilityDate: '2026-11-01',
  modules: ['@nuxtjs/tailwindcss', '@pinia/nuxt', 'nuxt-auth-utils', '@nuxt/icon', 'nuxt-security', '@nuxt/eslint', 'pinia-plugin-persistedstate/nuxt'],
  devtools: { enabled: false },
  telemetry: false,
  ssr: true,
  components: [{ path: '~/components', pathPrefix: false }],
  css: [],
  tailwindcss: { cssPath: '~/assets/css/main.css', viewer: false },
  icon: { provider: 'server', serverBundle: { collections: ['lucide'] }, clientBundle: { scan: true }, fallbackToApi: false },
  runtimeConfig: {
    session: { name: '__dawnward', password: '', maxAge: 60 * 60 * 12, cookie: { sameSite: 'lax', secure: false, httpOnly: true } },
  },
  auth: { loadStrategy: 'none' },
  alias: { '#mocks': '../mocks' },
  imports: { dirs: ['stores', 'composables/**', 'utils'] },
  typescript: {
    strict: true,
    tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } },
  },
  nitro: {
    experimental: { openAPI: false },
    externals: {
      // Node 20 takes the `module-sync` export of these, which the build's tracer does not know and would leave behind.
      traceInclude: [
        ...['async-function', 'generator-function', 'async-generator-function'].map(name => `node_modules/${name}/require.mjs`),
        // The letters of a PDF are read from their files when one is made.
        ...['latin', 'latin-ext'].flatMap(part => [400, 700].map(weight => `node_modules/@fontsource/nunito-sans/files/nunito-sans-${part}-${weight}-normal.woff`)),
      ],
    },
    esbuild: { options: { target: 'node20' } },
  },
  security: {
    strict: false,
    rateLimiter: false,
    // server/middleware/1.guard.ts refuses by size, in problem JSON and with the status of a refusal.
    requestSizeLimiter: false,
    xssValidator: false,
    corsHandler: false,
    csrf: false,
    hidePoweredBy: true,
    headers: {
      contentSecurityPolicy: {
        'default-src': ['\'self\''],
        'script-src': ['\'self\'', '\'nonce-{{nonce}}\'', '\'strict-dynamic\''],
        'style-src': ['\'self\'', '\'unsafe-inline\''],
        'img-src': ['\'self\'', 'data:', 'blob:'],
        'font-src': ['\'self\'', 'data:'],
        'connect-src': ['\'self\''],
        'object-src': ['\'none\''],
        'base-uri': ['\'none\''],
        'form-action': ['\'self\''],
        'frame-ancestors': ['\'none\''],
        'upgrade-insecure-requests': false,
      },
      crossOriginEmbedderPolicy: 'require-corp',
      strictTransportSecurity: { maxAge: 31_536_000, includeSubdomains: true },
      referrerPolicy: 'no-referrer',
      permissionsPolicy: { camera: [], microphone: [], geolocation: [] },
    },
  },
  app: {
    head: {
      htmlAttrs: { lang: 'en-GB' },
      titleTemplate: '%s · Dawnward',
      title: 'Dawnward',
      link: [{ rel: 'icon', type: 'image/svg+xml', href: '/favicon.svg' }],
      // Before the first paint, so that a darkened room never sees a bright frame.
      script: [{ src: '/theme.js' }],
      meta: [{ name: 'viewport', content: 'width=device-width, initial-scale=1' }, { name: 'robots', content: 'noindex' }],
    },
  },
})
