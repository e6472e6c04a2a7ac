import { fileURLToPath } from 'node:url'
import { defineConfig } from 'vite'

const inWeb = (path: string): string => fileURLToPath(new URL(path, import.meta.url))

const DAY_PARTS =
  /web\/(?:charts\/(?:axis|band|band-plot|band-tracks|day-band|lane|gate-words|bar)|views\/(?:ledger|stages|facts|assumptions)|ledger-lines|sentence)\.tsx?$/

export default defineConfig({
  root: inWeb('.'),
  base: './',
  resolve: { alias: [{ find: /^d3-interpolate$/, replacement: inWeb('charts/interpolate-numbers.ts') }] },
  oxc: { jsx: { runtime: 'automatic', importSource: 'preact' } },
  build: {
    outDir: '../dist/web',
    // The client, and the page that a share link opens.
    rollupOptions: {
      input: { index: inWeb('index.html'), share: inWeb('share.html') },
      // Parts of the day stay one file where a late screen uses some of them: several pack worse.
      output: { codeSplitting: { groups: [{ name: 'day', test: DAY_PARTS }] } },
    },
    emptyOutDir: true,
    target: 'es2022',
    // Nothing is inlined as data: the service's content policy allows its own files only.
    assetsInlineLimit: 0,
    modulePreload: { polyfill: false },
  },
})
