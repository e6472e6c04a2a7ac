/** The client's files and one name for just these; the build puts them in. */
const { files, edition }: { files: string[]; edition: string } = JSON.parse('__CLIENT__')

const worker = self as unknown as ServiceWorkerGlobalScope
const PREFIX = 'stagewatt-client-'
const NAME = PREFIX + edition
/** Pages opened before the last build still ask for its files. */
const EDITIONS_KEPT = 2
/** The page is fetched anew where the service answers within this time. [ms] */
const PATIENCE_MS = 3000

worker.addEventListener('install', (event) => event.waitUntil(fill()))
worker.addEventListener('activate', (event) => event.waitUntil(takeOver()))
worker.addEventListener('fetch', (event) => {
  const { request } = event
  const url = new URL(request.url)
  if (request.method !== 'GET' || url.origin !== location.origin) return
  if (url.pathname === '/' && request.mode === 'navigate') event.respondWith(page(request))
  else if (files.includes(url.pathname)) event.respondWith(kept(request))
})

async function fill(): Promise<void> {
  const cache = await caches.open(NAME)
  await cache.addAll(['/', ...files])
  await worker.skipWaiting()
}

async function takeOver(): Promise<void> {
  const names = (await caches.keys()).filter((name) => name.startsWith(PREFIX) && name !== NAME)
  const old = names.slice(0, Math.max(names.length - (EDITIONS_KEPT - 1), 0))
  await Promise.all(old.map((name) => caches.delete(name)))
  await worker.clients.claim()
}

/** The newest page that the service gives soon, else the one that is kept. */
async function page(request: Request): Promise<Response> {
  const fresh = fetch(request)
  const late = new Promise<null>((over) => setTimeout(() => over(null), PATIENCE_MS))
  const answer = await Promise.race([fresh, late]).catch(() => null)
  if (answer?.ok === true) return answer
  return (await (await caches.open(NAME)).match('/')) ?? answer ?? fresh
}

/** A file whose name changes with its content. */
const kept = async (request: Request): Promise<Response> => (await caches.match(request)) ?? fetch(request)
