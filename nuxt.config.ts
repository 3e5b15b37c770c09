import tailwind from './tailwind.config'

// HSTS and upgrade-insecure-requests would break plain HTTP on loopback, where the product is served by default.
const isDevelopment = process.env.NODE_ENV === 'development'

export default defineNuxtConfig({
  compatibilityDate: '2026-05-01',
  srcDir: '.',
  dir: { app: '.' },
  // Tests and development build beside a running product, so every build folder can be moved.
  buildDir: process.env.LANTHORN_BUILD_DIR ?? '.nuxt',
  telemetry: false,
  devtools: { enabled: false },
  ssr: true,
  modules: [
    '@nuxtjs/tailwindcss',
    '@pinia/nuxt',
    'nuxt-auth-utils',
    'nuxt-security',
    '@nuxt/eslint',
    './modules/worker',
  ],
  components: [{ path: '~/components', pathPrefix: false }],
  css: [
    '@fontsource/fira-sans/latin-400.css',
    '@fontsource/fira-sans/latin-500.css',
    '@fontsource/fira-sans/latin-600.css',
    '@fontsource/fira-sans/latin-ext-400.css',
    '@fontsource/fira-sans/latin-ext-600.css',
    '@fontsource/fira-sans/greek-400.css',
    '@fontsource/fira-sans/greek-500.css',
    '@fontsource/fira-sans/greek-600.css',
    '@fontsource/fira-mono/latin-400.css',
    '@fontsource/fira-mono/latin-500.css',
    '~/assets/css/tokens.css',
    '~/assets/css/parts.css',
    '~/assets/css/map.css',
  ],
  // Utilities load last, so that a class on an element may adjust a part of parts.css.
  tailwindcss: { cssPath: ['~/assets/css/tailwind.css', { injectPosition: 'last' }], config: tailwind, viewer: false },
  // Who is signed in comes from /api/session, never from what a cookie says.
  auth: { loadStrategy: 'none' },
  pinia: { storesDirs: ['stores/**'] },
  typescript: { strict: true, tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } } },
  sourcemap: { server: false, client: false },
  app: {
    head: {
      htmlAttrs: { lang: 'en' },
      title: 'Lanthorn',
      link: [{ rel: 'icon', type: 'image/svg+xml', href: '/favicon.svg' }],
      meta: [{ name: 'viewport', content: 'width=device-width, initial-scale=1' }],
    },
  },
  runtimeConfig: {
    session: { name: 'lanthorn', maxAge: 60 * 60 * 12, password: '', cookie: { sameSite: 'lax', secure: false } },
  },
  nitro: {
    output: { dir: process.env.LANTHORN_OUTPUT_DIR ?? '.output' },
    typescript: { strict: true },
  },
  security: {
    csrf: { cookieKey: 'lanthorn-csrf', addCsrfTokenToEventCtx: true, methodsToProtect: ['POST', 'PUT', 'PATCH', 'DELETE'] },
    corsHandler: false,
    // The module's limiter trusts X-Forwarded-For; defineRoute limits by person and socket address instead.
    rateLimiter: false,
    // Size is checked per route by defineRoute, before the body is read.
    requestSizeLimiter: false,
    xssValidator: false,
    headers: {
      crossOriginEmbedderPolicy: isDevelopment ? 'unsafe-none' : 'require-corp',
      strictTransportSecurity: false,
      contentSecurityPolicy: {
        'upgrade-insecure-requests': false,
        'default-src': ["'self'"],
        // Without the module's fallbacks for browsers that know no nonces: those let any script in.
        'script-src': ["'self'", "'nonce-{{nonce}}'", "'strict-dynamic'"],
        'connect-src': isDevelopment ? ["'self'", 'ws:'] : ["'self'"],
        'img-src': ["'self'", 'data:', 'blob:'],
        'font-src': ["'self'"],
        'style-src': ["'self'", "'unsafe-inline'"],
        'frame-ancestors': ["'none'"],
        'form-action': ["'self'"],
        'object-src': ["'none'"],
        'base-uri': ["'none'"],
      },
    },
  },
})
