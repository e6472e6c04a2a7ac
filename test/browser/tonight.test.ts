import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { FollowedChoice } from '../../web/crew-types.ts'
import type { PlanAnswer, PlanEntry, Planned } from '../../web/plan-types.ts'
import { isPlanned, mergedSections } from '../../web/plan-words.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { shownEnergies } from './shown.ts'
import { weigh } from './weigh.ts'

const PATIENCE_MS = 120_000
/** Worked out on a busy machine. [ms] */
const PLANNED_MS = 60_000
const DATE = '2026-10-16'
const CHOICE = `/api/v1/races/plateau-run/days/${DATE}/choice`
const TONIGHT = `#/tonight?race=plateau-run&car=weaver-2&sky=plateau-forecast&date=${DATE}`

describeWithBrowser('a planner in the evening', { timeout: 120_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  let plan: Planned

  const read = async <T>(path: string): Promise<T> => JSON.parse(await (await service.ask(path)).text())
  const newest = async (): Promise<PlanAnswer> => {
    const { items } = await read<{ items: PlanEntry[] }>('/api/v1/races/plateau-run/plans')
    return read(`/api/v1/plans/${items[0].id}`)
  }
  const followed = () => read<FollowedChoice>(CHOICE)
  const open = async (page: Page, hash: string, wanted: string): Promise<void> => {
    await page.goto('about:blank')
    await page.goto(`${service.url}/${hash}`)
    await page.locator(wanted).waitFor()
  }

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    const put = await service.ask(CHOICE, {
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

  it('fetches the screen only when it is opened, and sees that nothing is planned', async () => {
    const { page } = phone
    const first = await weigh(page, async () => {
      await page.goto(`${service.url}/#/day?race=plateau-run&date=${DATE}`)
      await page.locator('#sentence').waitFor()
    })
    expect(first).toBeLessThan(50)
    const late = await weigh(page, async () => {
      await page.getByRole('link', { name: 'Tonight' }).click()
      await page.getByRole('heading', { name: 'Nothing is planned for Fri 16 Oct yet.' }).waitFor()
    })
    expect(late).toBeGreaterThan(5)
    expect(late).toBeLessThan(25)
    await page.getByText('left empty: the race’s 82').waitFor()
    expect(await faults(page)).toEqual([])
  })

  it('orders a plan by keyboard, sees how far it is, and may take it back', async () => {
    const { page } = phone
    await page.getByLabel('Charge at the close, %').fill('70')
    await page.getByRole('button', { name: 'Plan this day' }).focus()
    await page.keyboard.press('Enter')
    await page.locator('#plan-work', { hasText: 'of 10 parts done' }).waitFor()
    await page.getByRole('button', { name: 'Take it back' }).click()
    await page.getByText('Taken back: nothing was planned.').waitFor()
    expect((await newest()).state).toBe('cancelled')
    await page.getByLabel('Charge at the close, %').fill('')
  })

  it('reads the plan that the service worked out, figure by figure', async () => {
    const { page } = phone
    await page.getByRole('button', { name: 'Plan this day' }).click()
    await page.locator('#plan-work').waitFor()
    await page.locator('#plan-facts').waitFor({ timeout: PLANNED_MS })
    const { plan: made, state } = await newest()
    expect(state).toBe('done')
    if (made === null || !isPlanned(made) || made.ranges === null) throw new Error('the demo day can be planned')
    plan = made
    expect((await page.locator('#plan-say').innerText()).replaceAll('\u202f', ' ')).toBe(plan.outcome.text)
    expect((await shownEnergies(page, '#plan-facts')).map(({ wh }) => wh)).toEqual([plan.forPeople.closingWh])
    expect(await page.locator('#plan-facts [data-at]').getAttribute('data-at')).toBe(plan.forPeople.arriveAt)
    const gates = await shownEnergies(page, '#gates')
    expect(gates.map(({ wh }) => wh)).toEqual(made.ranges.gates.map(({ plannedWh }) => plannedWh))
    for (const { wh, printed } of gates) expect(Math.abs(wh - printed)).toBeLessThanOrEqual(5)
    const kmh = await page.locator('#speeds [data-kmh]').allInnerTexts()
    expect(kmh.map(Number)).toEqual(mergedSections(plan.forPeople.sections).map(({ speedKmh }) => speedKmh))
    expect(await page.locator('#causes tbody th').allInnerTexts()).toEqual(made.ranges.causes.map(({ label }) => label))
    await page.locator('svg.plan [data-side="range"]').waitFor()
    await picture(page, 'tonight')
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
        await picture(page, `tonight-${width}-${colorScheme}`)
      }
    }
    await page.emulateMedia({ colorScheme: 'light' })
    await page.setViewportSize({ width: 390, height: 844 })
  })

  it('makes it the plan of record in one click, and takes that back in another', async () => {
    const { page } = phone
    const panel = page.locator('#publish')
    await panel.getByText('The crew follows 80 km/h, since').waitFor()
    await panel.getByRole('button', { name: 'Make this the plan of record' }).click()
    await panel.getByText('This is the plan of record, since').waitFor()
    expect((await followed()).speeds).toEqual(plan.forPeople.speeds)
    await panel.getByRole('button', { name: 'Undo: follow 80 km/h again' }).click()
    await panel.getByText('The crew follows 80 km/h, since').waitFor()
    expect((await followed()).speeds).toEqual({ kind: 'constant', speedKmh: 80 })
  })

  it('finds what is published on the day, through a reload too', async () => {
    const { page } = phone
    await page.getByRole('button', { name: 'Make this the plan of record' }).click()
    await page.getByText('This is the plan of record, since').waitFor()
    for (const _ of ['opened', 'opened again']) {
      await open(page, `#/day?race=plateau-run&date=${DATE}`, '#sentence')
      await page.getByText('The crew follows this, since').waitFor()
      expect(page.url()).toContain('speeds=followed')
      expect((await shownEnergies(page, '#sentence'))[0].wh).toBeCloseTo(plan.forPeople.closingWh, 1)
    }
    await page.reload()
    await page.getByText('The crew follows this, since').waitFor()
  })

  it('has the last plan at once, and an impossible target explained with a way out', async () => {
    const { page } = phone
    await open(page, TONIGHT, '#plan-facts')
    await page.getByLabel('Charge at the close, %').fill('100')
    await page.getByRole('button', { name: 'Plan this day' }).click()
    const way = page.locator('#impossible [data-target-pct]')
    await way.waitFor({ timeout: PLANNED_MS })
    expect(await page.locator('#plan-say').innerText()).toContain('just short of 100')
    expect(await faults(page)).toEqual([])
    expect(await overflowPx(page)).toBe(0)
    await picture(page, 'tonight-impossible')
    const { plan: refused } = await newest()
    const target = refused?.impossible?.nearest.find(({ what }) => what === 'target')
    expect(await way.getAttribute('data-target-pct')).toBe(String(Math.floor(target?.value ?? Number.NaN)))
    await way.click()
    expect(await page.getByLabel('Charge at the close, %').inputValue()).toBe(String(Math.floor(target?.value ?? 0)))
    await page.locator('#plan-facts').waitFor({ timeout: PLANNED_MS })
  })

  it('lays the plans of the day side by side and shows the one that is chosen', async () => {
    const { page } = phone
    await page.locator('#variants tbody tr').nth(2).waitFor()
    const rows = await page.locator('#variants tbody tr').evaluateAll((all) => all.map((row) => row.dataset.plan))
    const bodies = await Promise.all(rows.map((id) => read<PlanAnswer>(`/api/v1/plans/${id}`)))
    const shown = await shownEnergies(page, '#variants')
    expect(shown.map(({ wh }) => wh)).toEqual(bodies.flatMap(({ plan: one }) => one?.forPeople?.closingWh ?? []))
    await page.locator('#variants button', { hasText: '82' }).click()
    await page.locator('#plan-age', { hasText: '82' }).waitFor()
    expect((await shownEnergies(page, '#plan-facts')).map(({ wh }) => wh)).toEqual([plan.forPeople.closingWh])
  })

  it('complained about nothing on the way', () => {
    expect(phone.complaints).toEqual([])
  })
})
