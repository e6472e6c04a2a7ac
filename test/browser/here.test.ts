import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { PlanDocument } from '../../server/documents/plan.ts'
import type { WhatIfDocument } from '../../server/documents/what-if.ts'
import { whatIfText } from '../../web/phone/what-if-form.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { weigh } from './weigh.ts'

const PATIENCE_MS = 120_000
/** Worked out on a busy machine. [ms] */
const PLANNED_MS = 90_000
const DATE = '2026-10-17'
const NAMES = { race: { id: 'plateau-run' }, car: { id: 'weaver-2' }, sky: { id: 'plateau-forecast' } }
const OF_DAY = `race=plateau-run&car=weaver-2&sky=plateau-forecast&date=${DATE}&kmh=75`
const FROM = {
  at: '2026-10-17T10:00:00.000Z',
  stage: 'twin-wells-quiver-ridge',
  km: 60,
  chargePct: 60,
  speedKmh: 80,
}

/**
 * Browser and service may be of different versions of one JavaScript engine, whose sines and logarithms differ in the
 * last digit; the refinement of a flat best carries that to 1e-5 of its prices. At the same speeds for people all is
 * equal to 1e-9.
 */
function sameForPeople(phone: PlanDocument, service: PlanDocument): void {
  const [own, theirs] = [phone, service].map(({ forPeople }) => {
    if (forPeople === null) throw new Error('the rest of the demo day can be planned')
    return forPeople
  })
  const kmh = ({ sections }: typeof own): number[] => sections.map(({ speedKmh }) => speedKmh)
  expect(kmh(own)).toEqual(kmh(theirs))
  expect(own.arriveAt).toBe(theirs.arriveAt)
  for (const of of [(plan: typeof own) => plan.closingWh, (plan: typeof own) => plan.drivingMin])
    expect(Math.abs(of(own) / of(theirs) - 1)).toBeLessThan(1e-9)
  expect(Math.abs((phone.best?.closingWh ?? 0) - (service.best?.closingWh ?? 1))).toBeLessThan(0.5)
  expect(Math.abs((phone.bound?.withinMin ?? 0) - (service.bound?.withinMin ?? 1)) * 60).toBeLessThan(1)
}

function sameChanges(phone: WhatIfDocument, service: WhatIfDocument): void {
  const texts = ({ date, zone, method, text, variants }: WhatIfDocument) => [
    [date, zone, method, text],
    variants.map(({ name, holds }) => [name, holds]),
  ]
  expect(texts(phone)).toEqual(texts(service))
  for (const [i, { laterMin, closingWh }] of phone.variants.entries()) {
    expect(Math.abs((laterMin ?? 0) - (service.variants[i].laterMin ?? 0)) * 60).toBeLessThan(0.1)
    expect(Math.abs((closingWh ?? 0) - (service.variants[i].closingWh ?? 0))).toBeLessThan(0.1)
  }
}

/** The service's sentence up to the arrival: the bound in it may differ by a second. */
const toArrival = (text: string): string => text.split(' at the earliest')[0]

describeWithBrowser('a strategist without contact', { timeout: 180_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone

  const ask = async (path: string, body: object): Promise<string> => {
    const headers = { 'content-type': 'application/json' }
    const answer = await service.ask(path, { method: 'POST', headers, body: JSON.stringify({ ...NAMES, ...body }) })
    expect(answer.status).toBe(200)
    return answer.text()
  }
  const fill = async (page: Page, more: { km?: number; chargePct?: number } = {}): Promise<void> => {
    const { km = FROM.km, chargePct = FROM.chargePct } = more
    await page.getByLabel('Stage').selectOption(FROM.stage)
    await page.getByLabel('Km from its start').fill(String(km))
    await page.getByLabel('Time').fill('12:00')
    await page.getByLabel('Charge, %', { exact: true }).fill(String(chargePct))
    await page.getByLabel('Speed, km/h').fill(String(FROM.speedKmh))
    await page.getByLabel('Stop left, min').fill('')
  }
  const slide = (page: Page, field: string, value: number): Promise<void> =>
    page.locator(`[data-field="${field}"]`).fill(String(value))
  const spaced = (text: string): string => text.replaceAll('\u202f', ' ')
  /** Whether the documents of the race are kept on this phone. */
  const isKept = (page: Page): Promise<unknown> =>
    page.waitForFunction(
      `new Promise((found) => {
        const open = indexedDB.open('stagewatt')
        open.onsuccess = () => {
          const { result } = open
          const names = [...result.objectStoreNames]
          if (names.length === 0) { result.close(); indexedDB.deleteDatabase('stagewatt'); return found(false) }
          const count = result.transaction(names).objectStore(names[0]).count()
          count.onsuccess = () => { result.close(); found(count.result > 0) }
        }
      })`,
    )

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('loads nothing of it with the day, and has all of it soon after', async () => {
    const { page } = phone
    const first = await weigh(page, async () => {
      await page.goto(`${service.url}/#/day?${OF_DAY}`)
      await page.locator('#sentence').waitFor()
    })
    expect(first).toBeLessThan(50)
    await page.waitForFunction('navigator.serviceWorker.ready.then(() => navigator.serviceWorker.controller !== null)')
    await isKept(page)
  })

  it('has the service’s answers from the phone’s worker, as far as two engines’ sines and logarithms agree', async () => {
    const { page } = phone
    const documents = await (
      await service.ask('/api/v1/races/plateau-run/documents?car=weaver-2&sky=plateau-forecast')
    ).text()
    const list = await (await service.ask('/service-worker.js')).text()
    const script = /\/assets\/phone-worker-[\w-]+\.js/.exec(list)?.[0] ?? ''
    const variants = [
      { name: 'Less sun', change: { sunPct: 85 } },
      { name: 'All at once', change: { headwindMps: 2, massKg: 20, rollingPct: 120, openingPct: -3, stopMinutes: 8 } },
    ]
    const questions = [
      { kind: 'plan', asked: { date: DATE, from: FROM } },
      { kind: 'what-if', asked: { date: DATE, from: FROM, variants } },
      { kind: 'what-if', asked: { date: DATE, from: FROM, variants: variants.toReversed() } },
      { kind: 'what-if', asked: { date: DATE, variants } },
    ]
    const texts: string[] = await page.evaluate(
      `new Promise((done) => {
        const worker = new Worker(${JSON.stringify(script)}, { type: 'module' })
        const texts = []
        worker.onmessage = ({ data }) => {
          if (data.kind === 'outcome') texts[data.id] = data.outcome.text ?? JSON.stringify(data.outcome)
          if (texts.filter(Boolean).length === ${questions.length}) done(texts)
        }
        worker.postMessage({ kind: 'documents', documents: ${documents} })
        const questions = ${JSON.stringify(questions)}
        questions.forEach((question, id) => worker.postMessage({ kind: 'question', id, question }))
      })`,
    )
    const wanted: string[] = []
    for (const { kind, asked } of questions) wanted.push(await ask(`/api/v1/${kind}`, asked))
    sameForPeople(JSON.parse(texts[0]), JSON.parse(wanted[0]))
    for (const i of [1, 2, 3]) sameChanges(JSON.parse(texts[i]), JSON.parse(wanted[i]))
    const [there, here]: WhatIfDocument[] = [JSON.parse(texts[1]), JSON.parse(texts[2])]
    expect(here.variants).toEqual(there.variants.toReversed())
  })

  it('asks the service where that answers, and says so', async () => {
    const { page } = phone
    await page.getByRole('link', { name: 'Go on from where the car is' }).click()
    await page.locator('#here-title').waitFor()
    await fill(page)
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.locator('[data-source]').first().waitFor({ timeout: PLANNED_MS })
    const plan: PlanDocument = JSON.parse(await ask('/api/v1/plan', { date: DATE, from: FROM }))
    expect(toArrival(spaced(await page.locator('#here-say').innerText()))).toBe(toArrival(plan.outcome.text))
  })

  it('plans the rest of the day on the phone once the service is out of reach, and the last question wins', async () => {
    const { page } = phone
    await page.context().setOffline(true)
    await fill(page, { chargePct: 45 })
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.locator('#here-work').waitFor()
    await fill(page, { chargePct: 52 })
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.locator('[data-source="phone"]').waitFor({ timeout: PLANNED_MS })
    await page.locator('#here-work').waitFor({ state: 'detached' })
    const plan: PlanDocument = JSON.parse(await ask('/api/v1/plan', { date: DATE, from: { ...FROM, chargePct: 52 } }))
    expect(toArrival(spaced(await page.locator('#here-say').innerText()))).toBe(toArrival(plan.outcome.text))
    const shownWh = Number(await page.locator('#plan-facts [data-wh]').first().getAttribute('data-wh'))
    expect(Math.abs(shownWh / (plan.forPeople?.closingWh ?? 0) - 1)).toBeLessThan(1e-9)
    expect(spaced(await page.locator('[data-source="phone"]').innerText())).toMatch(
      /^Worked out on this phone, \d\d:\d\d UTC\+2, from car, sky and race as the service had them \d+ (s|min) ago\.$/,
    )
    expect(await faults(page)).toEqual([])
    expect(await overflowPx(page)).toBe(0)
    await picture(page, 'here-offline')
  })

  it('answers the sliders on the phone, the last one in the end', async () => {
    const { page } = phone
    for (const pct of [99, 95, 91, 88, 80]) await slide(page, 'sunPct', pct)
    await slide(page, 'headwindMps', 1.5)
    const change = { sunPct: 80, headwindMps: 1.5 }
    const from = { ...FROM, chargePct: 52 }
    const answer: WhatIfDocument = JSON.parse(
      await ask('/api/v1/what-if', { date: DATE, from, variants: [{ name: 'Changed', change }] }),
    )
    const say = page.locator('#what-if-say')
    await page
      .locator('#what-if-say[aria-busy="false"]', { hasText: spaced(whatIfText(answer)).slice(0, 12) })
      .waitFor({
        timeout: PLANNED_MS,
      })
    expect(await say.innerText()).toBe(whatIfText(answer))
    await page.getByText('Sun, of the forecast: 80').waitFor()
    await page.locator('.what-if [data-source="phone"]').waitFor()
    expect(await faults(page)).toEqual([])
    await say.scrollIntoViewIfNeeded()
    await picture(page, 'what-if-offline')
  })

  it('opens without contact and works the day out, as it was typed last', async () => {
    const { page } = phone
    await page.goto('about:blank')
    await page.goto(`${service.url}/#/here?${OF_DAY}`)
    await page.getByText('As it was typed last on this phone.').waitFor()
    await fill(page, { km: 61 })
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.locator('[data-source="phone"]').waitFor({ timeout: PLANNED_MS })
    const plan: PlanDocument = JSON.parse(await ask('/api/v1/plan', { date: DATE, from: { ...FROM, km: 61 } }))
    expect(toArrival(spaced(await page.locator('#here-say').innerText()))).toBe(toArrival(plan.outcome.text))
    await page.context().setOffline(false)
  })

  it('says by its field what cannot be', async () => {
    const { page } = phone
    await page.context().setOffline(true)
    await fill(page, { km: 5000 })
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.locator('.problems', { hasText: 'from.km' }).waitFor({ timeout: PLANNED_MS })
    await page.context().setOffline(false)
  })

  it('says plainly where a phone lacks the documents', async () => {
    const other = await openPhone(browser)
    const { page } = other
    await enter(other, service)
    await page.route('**/documents?*', (route) => route.abort())
    await page.goto(`${service.url}/#/here?${OF_DAY}`)
    await page.locator('#here-title').waitFor()
    await page.context().setOffline(true)
    await fill(page)
    await page.getByRole('button', { name: 'Plan the rest of the day' }).click()
    await page.getByText('Not done: this race’s documents are not on this phone.').waitFor()
    await page.getByText('open it once with contact before the road').waitFor()
    await picture(page, 'here-not-kept')
    await other.close()
  })
})
