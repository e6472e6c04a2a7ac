import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { FollowedChoice } from '../../web/crew-types.ts'
import type { PlanAnswer } from '../../web/plan-types.ts'
import type { KeptVariant } from '../../web/variant-types.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { shownEnergies } from './shown.ts'

const PATIENCE_MS = 120_000
/** Worked out on a busy machine. [ms] */
const PLANNED_MS = 60_000
const DATE = '2026-10-16'
const CHOICE = `/api/v1/races/plateau-run/days/${DATE}/choice`
const TONIGHT = `#/tonight?race=plateau-run&car=weaver-2&sky=plateau-forecast&date=${DATE}`

describeWithBrowser('a planner who asks what if', { timeout: 120_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  let planId: string

  const read = async <T>(path: string): Promise<T> => JSON.parse(await (await service.ask(path)).text())
  const kept = async (): Promise<KeptVariant[]> =>
    (await read<{ items: KeptVariant[] }>(`/api/v1/plans/${planId}/variants`)).items
  const order = async (wanted: object): Promise<string> => {
    const answer = await service.ask('/api/v1/races/plateau-run/plans', {
      method: 'POST',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({ carId: 'weaver-2', skyId: 'plateau-forecast', date: DATE, promisePct: 5, ...wanted }),
    })
    const { id } = JSON.parse(await answer.text())
    for (;;) {
      const { state } = await read<PlanAnswer>(`/api/v1/plans/${id}`)
      if (state === 'done') return id
      if (state !== 'working') throw new Error(`the plan ${state}`)
      await new Promise((done) => setTimeout(done, 200))
    }
  }

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    planId = await order({})
  }, PATIENCE_MS)
  afterAll(async () => {
    await browser?.close()
    await service?.stop()
  })

  it('moves a slider and is told at once about what it does, marked as approximate', async () => {
    const { page } = phone
    await page.goto(`${service.url}/${TONIGHT}`)
    const sun = page.locator('#variants-of input[data-field="sunPct"]')
    await sun.waitFor({ timeout: PLANNED_MS })
    const said = page.locator('#quick', { hasText: /^Approximate: Arrive \d\d:\d\d, .*later/ })
    // The first answers may wait for this device to have the documents and to plan the day once; then they come at once.
    let before = 'Move one'
    for (const [pct, timeout] of [
      ['95', PLANNED_MS],
      ['90', PLANNED_MS],
      ['85', 3000],
    ] as const) {
      await sun.fill(pct)
      await said.filter({ hasNotText: before }).waitFor({ timeout })
      before = await said.innerText()
    }
    expect(await faults(page)).toEqual([])
  })

  it('works it out in full beside the plan, figure by figure', async () => {
    const { page } = phone
    await page.locator('#variants-of').getByRole('button', { name: 'Work it out' }).first().click()
    const row = page.locator('#variant-table tbody tr').nth(1)
    await row.locator('[data-pct]').waitFor({ timeout: PLANNED_MS })
    const [{ answer, name }] = await kept()
    expect(name).toBe('Sun 85 %')
    const { plan } = await read<PlanAnswer>(`/api/v1/plans/${planId}`)
    expect((await shownEnergies(page, '#variant-table')).map(({ wh }) => wh)).toEqual([
      plan?.forPeople?.closingWh,
      answer?.figures?.closingWh,
    ])
    const minutes = await page
      .locator('#variant-minutes [data-min]')
      .evaluateAll((all) => all.map((e) => e.dataset.min))
    const parts = (answer?.arrivalCauses ?? []).map(({ min }) => min).filter((min) => Math.abs(min) >= 0.05)
    expect(minutes.map(Number)).toEqual([...parts, answer?.laterMin])
    const lines = await page
      .locator('#variant-energies tbody tr:not(.sum) td:nth-of-type(1)')
      .evaluateAll((all) => all.map((e) => ({ wh: Number(e.dataset.wh), text: e.textContent })))
    const printed = lines.map(({ text }) => Number(text.replace('\u2212', '-').replace(/[^\d-]/g, '')))
    lines.forEach(({ wh }, i) => expect(Math.abs(wh - printed[i])).toBeLessThanOrEqual(0.5))
    const together = await page.locator('#variant-energies .sum td').first().innerText()
    expect(Number(together.replace('\u2212', '-').replace(/[^\d-]/g, ''))).toBe(printed.reduce((a, b) => a + b, 0))
  })

  it('puts a held speed beside it, and takes back what is being worked out', async () => {
    const { page } = phone
    const section = page.locator('#variants-of')
    await section.getByLabel('One held speed, km/h').fill('70')
    await section.locator('.held').getByRole('button', { name: 'Work it out' }).click()
    await page.locator('#variant-table tbody tr').nth(2).locator('[data-pct]').waitFor({ timeout: PLANNED_MS })
    expect((await kept())[0]).toMatchObject({ name: 'Held at 70 km/h', state: 'done' })
    for (const [field, value] of [
      ['headwindMps', '2'],
      ['massKg', '20'],
      ['dragAreaPct', '110'],
    ])
      await section.locator(`input[data-field="${field}"]`).fill(value)
    await section.getByRole('button', { name: 'Work it out' }).first().click()
    await page.locator('#variant-table').getByRole('button', { name: 'Take back' }).click()
    await page.locator('#variant-table .pending').waitFor({ state: 'detached' })
    expect((await kept())[0].state).toBe('cancelled')
  })

  it('has no fault that axe-core knows, by day and by night, and fits 320 and 1280 px', async () => {
    const { page } = phone
    await page.locator('#variant-table .named').first().click()
    for (const colorScheme of ['light', 'dark'] as const) {
      await page.emulateMedia({ colorScheme })
      for (const [width, height] of [
        [390, 844],
        [320, 640],
        [1280, 800],
      ]) {
        await page.setViewportSize({ width, height })
        await page.locator('#variants-of').scrollIntoViewIfNeeded()
        expect(await overflowPx(page), `${width}`).toBe(0)
        expect(await faults(page), `${width} ${colorScheme}`).toEqual([])
        await page.locator('#variants-of').evaluate((element) => element.scrollIntoView())
        await picture(page, `variants-${width}-${colorScheme}`)
      }
    }
    await page.emulateMedia({ colorScheme: 'light' })
    await page.setViewportSize({ width: 390, height: 844 })
  })

  it('finds what was worked out again after a reload', async () => {
    const { page } = phone
    await page.reload()
    await page.locator('#variant-table tbody tr').nth(2).waitFor({ timeout: PLANNED_MS })
    expect(await page.locator('#variant-table .named').allInnerTexts()).toEqual(['Sun 85\u202f%', 'Held at 70 km/h'])
  })

  it('publishes the first plan of a day, and takes that back to nothing', async () => {
    const { page } = phone
    const panel = page.locator('#publish')
    await panel.getByText('Nothing is followed on this day yet.').waitFor()
    await panel.getByRole('button', { name: 'Make this the plan of record' }).click()
    await panel.getByText('This is the plan of record, since').waitFor()
    await panel.getByRole('button', { name: 'Undo: follow nothing again' }).click()
    await panel.getByText('Nothing is followed on this day yet.').waitFor()
    expect((await service.ask(CHOICE)).status).toBe(404)
  })

  it('publishes a plan that ends at a camp, and the day ends there', async () => {
    const { page } = phone
    const id = await order({ byTime: '09:20', members: 100 })
    const { plan } = await read<PlanAnswer>(`/api/v1/plans/${id}`)
    if (plan?.camp == null || plan.forPeople === null) throw new Error('the demo’s Friday is not driven by 09:20')
    const put = await service.ask(CHOICE, {
      method: 'PUT',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({
        carId: 'weaver-2',
        skyId: 'plateau-forecast',
        speeds: plan.forPeople.speeds,
        until: plan.camp.until,
      }),
    })
    expect(put.status).toBe(200)
    expect((await read<FollowedChoice>(CHOICE)).until).toEqual(plan.camp.until)
    await page.goto('about:blank')
    await page.goto(`${service.url}/#/day?race=plateau-run&date=${DATE}`)
    await page.getByText('The crew follows this, since').waitFor()
    expect((await shownEnergies(page, '#sentence'))[0].wh).toBeCloseTo(plan.forPeople.closingWh, 0)
  })

  it('complained about nothing on the way', () => {
    expect(phone.complaints).toEqual([])
  })
})
