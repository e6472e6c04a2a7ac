import { mkdirSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { type Browser, type BrowserContextOptions, chromium, type Page } from 'playwright-core'
import { chromiumPath } from '../support/needs.ts'
import type { Service } from './service.ts'

const FLAGS = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
  '--no-first-run',
]

export const openBrowser = (): Promise<Browser> =>
  chromium.launch({ executablePath: chromiumPath() ?? undefined, args: FLAGS })

/** A page with everything it complained about. */
export interface Phone {
  page: Page
  complaints: string[]
  close(): Promise<void>
}

/** A phone of 390 × 844 that notes console errors, page errors and everything the content policy refused. */
export async function openPhone(browser: Browser, options: BrowserContextOptions = {}): Promise<Phone> {
  const context = await browser.newContext({
    viewport: { width: 390, height: 844 },
    locale: 'en-GB',
    timezoneId: 'Africa/Windhoek',
    ...options,
  })
  const page = await context.newPage()
  page.setDefaultTimeout(60_000)
  const complaints: string[] = []
  page.on('console', (message) => {
    // A day that nobody follows yet is told by a 404, which the browser logs by itself.
    if (message.location().url.endsWith('/choice') && message.text().includes('status of 404')) return
    if (message.type() === 'error' || message.type() === 'warning') complaints.push(message.text())
  })
  page.on('pageerror', (error) => complaints.push(error.message))
  await page.addInitScript(
    "addEventListener('securitypolicyviolation', (e) => console.error('policy refused ' + e.violatedDirective + ' ' + e.blockedURI))",
  )
  return { page, complaints, close: () => context.close() }
}

/** Signs a phone in as the owner's link does. */
export async function enter({ page }: Phone, { url, ownerLink }: Service): Promise<void> {
  const token = ownerLink.split('#owner=')[1]
  const answer = await page.context().request.post(`${url}/api/v1/sessions`, { data: { token } })
  if (!answer.ok()) throw new Error(`${answer.status()} ${await answer.text()}`)
}

/** Leaves a picture for whoever looks at the screens; the path is printed with the tests. */
export async function picture(page: Page, name: string): Promise<void> {
  const folder = join(tmpdir(), 'stagewatt-pictures')
  mkdirSync(folder, { recursive: true })
  await page.screenshot({ path: join(folder, `${name}.png`) })
}

/** Width that the page would scroll over sideways. [px] */
export const overflowPx = (page: Page): Promise<number> =>
  page.evaluate('document.documentElement.scrollWidth - document.documentElement.clientWidth')
