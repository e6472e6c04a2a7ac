import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { FollowedChoice } from '../../web/crew-types.ts'
import type { RacePlanAnswer, RacePlanDocument, RacePlanEntry } from '../../web/race-types.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { weigh } from './weigh.ts'

const PATIENCE_MS = 120_000
/** Worked out on a busy machine. [ms] */
const PLANNED_MS = 150_000
const [FRI, SAT] = ['2026-10-16', '2026-10-17']
const RACE_PLAN = `#/race-plan?race=plateau-run&car=weaver-2&sky=plateau-forecast&date=${FRI}`

describeWithBrowser('a planner who plans the whole race', { timeout: 240_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone

  const read = async <T>(path: string): Promise<T> => JSON.parse(await (await service.ask(`/api/v1${path}`)).text())
  const entries = async (): Promise<RacePlanEntry[]> =>
    (await read<{ items: RacePlanEntry[] }>('/races/plateau-run/race-plans')).items
  const newest = async (): Promise<RacePlanDocument> => {
    const { plan } = await read<RacePlanAnswer>(`/race-plans/${(await entries())[0].id}`)
    if (plan === null) throw new Error('the demo race can be planned')
    return plan
  }
  const followed = (date: string) => read<FollowedChoice>(`/races/plateau-run/days/${date}/choice`)
  const targets = async (): Promise<(number | undefined)[]> => {
    const { document } = await read<{ document: { days: { targetPct?: number }[] } }>('/races/plateau-run')
    return document.days.map(({ targetPct }) => targetPct)
  }
  const plain = (text: string): string => text.replace(/[\u202f\u00a0]/g, ' ')

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    const put = await service.ask(`/api/v1/races/plateau-run/days/${FRI}/choice`, {
      method: 'PUT',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({
        carId: 'weaver-2',
        skyId: 'plateau-forecast',
        speeds: { kind: 'constant', speedKmh: 80 },
      }),
    })
    expect(put.status).toBe(200)
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('finds it beside the day’s plan, fetched only then', async () => {
    const { page } = phone
    await page.goto(`${service.url}/#/tonight?race=plateau-run&date=${FRI}`)
    await page.getByRole('heading', { name: 'Nothing is planned for Fri 16 Oct yet.' }).waitFor()
    const late = await weigh(page, async () => {
      await page.getByRole('button', { name: 'Whole race' }).click()
      await page.getByRole('heading', { name: 'The race is not planned as a whole yet.' }).waitFor()
    })
    expect(late).toBeGreaterThan(5)
    expect(late).toBeLessThan(15)
    await page.locator('.nights').getByLabel('Fri 16 Oct').waitFor()
    expect(await faults(page)).toEqual([])
  })

  it('orders two days, sees how far the work is, and may take it back', async () => {
    const { page } = phone
    await page.getByLabel('Last day').selectOption(SAT)
    await page.locator('.nights').getByLabel('Fri 16 Oct').selectOption('fixed')
    await page.getByText('A number from 0 to 100.').waitFor()
    expect(await page.getByRole('button', { name: 'Plan the race' }).isDisabled()).toBe(true)
    await page.getByLabel('Fri 16 Oct, %').fill('70')
    await page.getByRole('button', { name: 'Plan the race' }).focus()
    await page.keyboard.press('Enter')
    await page.locator('#plan-work', { hasText: 'of 10 parts done' }).waitFor()
    await page.getByRole('button', { name: 'Take it back' }).click()
    await page.getByText('Taken back: nothing was planned.').waitFor()
    expect(await entries()).toMatchObject([
      { state: 'cancelled', wanted: { toDate: SAT, nights: [{ date: FRI, kind: 'fixed', chargePct: 70 }] } },
    ])
  })

  it('reads the plan that the service worked out, day by day and night by night', async () => {
    const { page } = phone
    await page.locator('.nights').getByLabel('Fri 16 Oct', { exact: true }).selectOption('race')
    await page.getByRole('button', { name: 'Plan the race' }).click()
    await page.locator('#race-days').waitFor({ timeout: PLANNED_MS })
    const plan = await newest()
    expect(plain(await page.locator('#race-say').innerText())).toBe(plan.outcome.text)
    expect(await page.locator('#race-facts [data-min]').getAttribute('data-min')).toBe(String(plan.drivingMin))
    const closes = await page.locator('#race-days [data-pct]').evaluateAll((all) => all.map((one) => one.dataset.pct))
    expect(closes).toEqual(plan.days.map(({ close }) => String(close.closing?.chargePct)))
    const nights = await page.locator('#race-nights li p').allInnerTexts()
    expect(nights.map((text) => plain(text).split('\n')[1])).toEqual(plan.days.map(({ close }) => close.text))
    await page.locator('#race-days button', { hasText: 'Sat 17 Oct' }).click()
    await page.locator('#race-day', { hasText: 'Saltpan to Blue Gate' }).waitFor()
    await page.locator('#race-day summary').click()
    const shown = await page.locator('#race-speeds [data-kmh]').allInnerTexts()
    const { sections = [] } = plan.days[1].road ?? {}
    expect(new Set(shown.map(Number))).toEqual(new Set(sections.map(({ speedKmh }) => speedKmh)))
    await page.locator('svg.plan [data-side="battery"]').waitFor()
    expect(await page.locator('svg.plan [data-close="race"]').count()).toBe(2)
  })

  it('has no fault that axe-core knows, by day and by night, and fits 320 and 1280 px', async () => {
    const { page } = phone
    for (const colorScheme of ['light', 'dark'] as const) {
      await page.emulateMedia({ colorScheme })
      for (const [width, height] of [
        [390, 844],
        [320, 640],
        [1280, 800],
      ]) {
        await page.setViewportSize({ width, height })
        expect(await overflowPx(page), `${width}`).toBe(0)
        expect(await faults(page), `${width} ${colorScheme}`).toEqual([])
        await picture(page, `race-plan-${width}-${colorScheme}`)
      }
    }
    await page.emulateMedia({ colorScheme: 'light' })
    await page.setViewportSize({ width: 390, height: 844 })
  })

  it('frees the night that costs time in one click, and sees that it gains', async () => {
    const { page } = phone
    const given = await newest()
    expect(given.days[0].close.costMin).toBeGreaterThan(0.1)
    await page.locator(`[data-night="${FRI}"] button`).click()
    await page.locator('#race-nights', { hasText: 'gains nothing' }).waitFor({ timeout: PLANNED_MS })
    const free = await newest()
    expect(free.days[0].close.kind).toBe('found')
    expect(Math.abs(given.bestMin - free.bestMin - (given.days[0].close.costMin ?? 0))).toBeLessThan(0.1)
    expect(await page.locator('svg.plan [data-close="found"]').count()).toBe(1)
    await picture(page, 'race-plan-free')
  })

  it('makes its days what the crew follows in one click, and takes that back in another', async () => {
    const { page } = phone
    const plan = await newest()
    const panel = page.locator('#race-publish')
    await panel.getByRole('button', { name: 'Follow both days' }).click()
    await panel.locator('li', { hasText: 'the crew follows this plan' }).nth(1).waitFor({ timeout: 60_000 })
    for (const [d, date] of [FRI, SAT].entries())
      expect((await followed(date)).speeds).toEqual(plan.days[d].road?.speeds)
    await panel.getByRole('button', { name: 'Undo: follow as before' }).click()
    await panel.locator('li', { hasText: 'the crew follows 80 km/h' }).waitFor({ timeout: 60_000 })
    await panel.locator('li', { hasText: 'nothing is followed yet' }).waitFor({ timeout: 60_000 })
    expect((await followed(FRI)).speeds).toEqual({ kind: 'constant', speedKmh: 80 })
    expect((await service.ask(`/api/v1/races/plateau-run/days/${SAT}/choice`)).status).toBe(404)
    await panel.getByRole('button', { name: 'Follow Sat 17 Oct only' }).click()
    await panel
      .locator(`li[data-date="${SAT}"]`, { hasText: 'the crew follows this plan' })
      .waitFor({ timeout: 60_000 })
    expect((await followed(FRI)).speeds).toEqual({ kind: 'constant', speedKmh: 80 })
  })

  it('writes the night’s charge into the race, and takes that back', async () => {
    const { page } = phone
    const [before, plan] = [await targets(), await newest()]
    await page.getByRole('button', { name: 'Write these charges into the race' }).click()
    await page.getByRole('button', { name: 'Undo: the race’s charges as they were' }).waitFor()
    const found = plan.days[0].close.closing?.chargePct ?? 0
    const [friday = 0, ...others] = await targets()
    expect(found - friday).toBeGreaterThanOrEqual(0)
    expect(found - friday).toBeLessThanOrEqual(0.1)
    expect(others).toEqual(before.slice(1))
    await page.getByRole('button', { name: 'Undo: the race’s charges as they were' }).click()
    await page.getByRole('button', { name: 'Write these charges into the race' }).waitFor()
    expect(await targets()).toEqual(before)
  })

  it('has the last plan at once after a reload, and a charge that cannot be, explained with a way out', async () => {
    const { page } = phone
    await page.goto('about:blank')
    await page.goto(`${service.url}/${RACE_PLAN}`)
    await page.locator('#race-days').waitFor()
    await page.getByText('Other days or charges').click()
    await page.locator('.nights').getByLabel('Fri 16 Oct', { exact: true }).selectOption('fixed')
    await page.getByLabel('Fri 16 Oct, %').fill('100')
    await page.getByRole('button', { name: 'Plan the race' }).click()
    await page.locator('#race-say', { hasText: 'Fri' }).filter({ hasText: '100' }).waitFor({ timeout: PLANNED_MS })
    const way = page.locator(`[data-impossible="${FRI}"] [data-target-pct]`)
    await way.waitFor()
    expect(await faults(page)).toEqual([])
    expect(await overflowPx(page)).toBe(0)
    await picture(page, 'race-plan-impossible')
    const target = (await newest()).days[0].impossible?.nearest.find(({ what }) => what === 'target')
    expect(await way.getAttribute('data-target-pct')).toBe(String(Math.floor(target?.value ?? Number.NaN)))
  })

  it('complained about nothing on the way', () => {
    expect(phone.complaints).toEqual([])
  })
})
