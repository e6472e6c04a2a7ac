import { createHash } from 'node:crypto'
import { readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { defineConfig, type Plugin } from 'vite'

const inWeb = (path: string): string => fileURLToPath(new URL(path, import.meta.url))

const DAY_PARTS =
  /web\/(?:charts\/(?:axis|band|band-plot|band-tracks|day-band|lane|gate-words|bar)|views\/(?:ledger|stages|facts|assumptions)|ledger-lines|sentence)\.tsx?$/

/** Parts that stay one file where a late screen uses some of them: several pack worse. */
const GROUPS = [
  { name: 'day', test: DAY_PARTS },
  { name: 'api', test: /web\/(?:api|links)\.ts$/ },
  { name: 'state', test: /web\/(?:session|choice|crew|crew-state|live|state)\.ts$/ },
  { name: 'age-of-data', test: /web\/(?:charts\/(?:disc|mark)|age|views\/age-of-data)\.tsx?$/ },
]

const SERVICE_WORKER = 'service-worker'

/** Tells the service worker which files the client is made of; the page of a share link keeps nothing. */
function listFiles(): Plugin {
  return {
    name: 'list-files',
    writeBundle({ dir = '' }, bundle) {
      const files = Object.keys(bundle).filter(
        (name) => name.startsWith('assets/') && !/^assets\/share-[\w-]{8}\./.test(name),
      )
      const page = readFileSync(join(dir, 'index.html'), 'utf8')
      const edition = createHash('sha256')
        .update([page, ...files].join())
        .digest('hex')
        .slice(0, 12)
      const client = JSON.stringify({ files: files.map((name) => `/${name}`), edition })
      const path = join(dir, `${SERVICE_WORKER}.js`)
      writeFileSync(path, readFileSync(path, 'utf8').replace('__CLIENT__', client))
    },
  }
}

export default defineConfig({
  root: inWeb('.'),
  base: './',
  resolve: { alias: [{ find: /^d3-interpolate$/, replacement: inWeb('charts/interpolate-numbers.ts') }] },
  plugins: [listFiles()],
  worker: { format: 'es' },
  oxc: { jsx: { runtime: 'automatic', importSource: 'preact' } },
  build: {
    outDir: '../dist/web',
    // The client, and the page that a share link opens.
    rollupOptions: {
      input: {
        index: inWeb('index.html'),
        share: inWeb('share.html'),
        [SERVICE_WORKER]: inWeb('service-worker/service-worker.ts'),
      },
      output: {
        codeSplitting: { groups: GROUPS },
        entryFileNames: ({ name }) => (name === SERVICE_WORKER ? '[name].js' : 'assets/[name]-[hash].js'),
      },
    },
    emptyOutDir: true,
    target: 'es2022',
    // Nothing is inlined as data: the service's content policy allows its own files only.
    assetsInlineLimit: 0,
    modulePreload: { polyfill: false },
  },
})
