import { gzipSync } from 'node:zlib'
import type { Page, Response } from 'playwright-core'

/** Scripts and styles that a page fetches while something is done, as gzip packs each. [kB] */
export async function weigh(page: Page, act: () => Promise<void>): Promise<number> {
  const fetched = new Map<string, Promise<number>>()
  const note = (response: Response): void => {
    if (/\.(?:js|css)$/.test(new URL(response.url()).pathname))
      fetched.set(
        response.url(),
        response.body().then((body) => gzipSync(body).length),
      )
  }
  page.on('response', note)
  await act()
  page.off('response', note)
  const sizes = await Promise.all(fetched.values())
  return sizes.reduce((sum, size) => sum + size, 0) / 1000
}
