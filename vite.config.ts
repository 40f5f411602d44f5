import { realpathSync } from 'node:fs';
import vue from '@vitejs/plugin-vue';
import { defineConfig } from 'vite';
import { VitePWA } from 'vite-plugin-pwa';

const languages = ['en', 'es', 'fr', 'it', 'pt'];

/** Texts that the phone and the door need, as in src/lib/i18n.ts. */
const phoneTexts = 'base|conflicts|door|field|frame|measures|problem|rowstrip|safety';

/** Two chunks a language, so that a phone in the row loads its own small set of texts and no more. */
const languageGroups = languages.flatMap((language) => [
  { name: `texts-${language}-phone`, test: new RegExp(`src[\\\\/]locales[\\\\/]${language}[\\\\/](?:${phoneTexts})\\.json`), priority: 45 },
  { name: `texts-${language}`, test: new RegExp(`src[\\\\/]locales[\\\\/]${language}[\\\\/]`), priority: 40 },
]);

export default defineConfig({
  plugins: [
    vue(),
    VitePWA({
      // The page asks before a new version takes over: readings still on the phone must not meet a half-changed program.
      registerType: 'prompt',
      injectRegister: false,
      includeAssets: ['mark.svg', 'apple-touch-icon.png'],
      manifest: {
        name: 'Patchrow',
        short_name: 'Patchrow',
        description: 'Zones, samples and pick lots of a wine estate.',
        start_url: '/',
        display: 'standalone',
        background_color: '#F6F4EE',
        theme_color: '#173843',
        icons: [
          { src: 'icon-192.png', sizes: '192x192', type: 'image/png' },
          { src: 'icon-512.png', sizes: '512x512', type: 'image/png' },
          { src: 'icon-512.png', sizes: '512x512', type: 'image/png', purpose: 'maskable' },
        ],
      },
      workbox: {
        globPatterns: ['**/*.{js,mjs,css,html,svg,woff2}'],
        // Maps and charts need the office's connection anyway; crews work from the row strip.
        globIgnores: ['**/maplibre*', '**/draw*', '**/chart*'],
        navigateFallback: '/index.html',
        navigateFallbackDenylist: [/^\/api/],
        cleanupOutdatedCaches: true,
      },
    }),
  ],
  define: {
    __VUE_I18N_FULL_INSTALL__: false,
    __VUE_I18N_LEGACY_API__: false,
    __INTLIFY_PROD_DEVTOOLS__: false,
    __VUE_OPTIONS_API__: true,
    __VUE_PROD_DEVTOOLS__: false,
    __VUE_PROD_HYDRATION_MISMATCH_DETAILS__: false,
  },
  build: {
    outDir: 'dist/client',
    target: 'es2022',
    // The map's chunk is large and loads only with a map; a warning on every build would hide the next one.
    chunkSizeWarningLimit: 1100,
    rolldownOptions: {
      output: {
        codeSplitting: {
          groups: [
            ...languageGroups,
            { name: 'maplibre', test: /node_modules[\\/](maplibre-gl|@maplibre|@mapbox)[\\/]/, priority: 30 },
            { name: 'draw', test: /node_modules[\\/]terra-draw/, priority: 25 },
            { name: 'chart', test: /node_modules[\\/](chart\.js|vue-chartjs|@kurkle)[\\/]/, priority: 25 },
            { name: 'vue', test: /node_modules[\\/](@vue|vue|vue-router|pinia|vue-i18n|@intlify)[\\/]/, priority: 20 },
            // The crew's first screen with all that it stands on, as one file: on a weak signal two dozen small ones cost a
            // second and more. Every screen shares most of it, so that the page asks for it at once.
            { name: 'crew', test: /src[\\/]views[\\/]field[\\/]FieldWorkView/, priority: 10 },
          ],
        },
      },
    },
  },
  server: {
    // Packages that are a symbolic link lie outside of the checkout by their real name, and fonts from there are refused.
    fs: { allow: [import.meta.dirname, realpathSync('node_modules')] },
    proxy: { '/api': { target: process.env.PATCHROW_API ?? 'http://127.0.0.1:3000', changeOrigin: false } },
  },
});
