import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { describeWithBrowser } from '../support/needs.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { budgetOf, ledgerEnergies, shownEnergies } from './shown.ts'

const SATURDAY = { race: 'plateau-run', car: 'weaver-2', sky: 'plateau-forecast', date: '2026-10-17' }
const PATIENCE_MS = 120_000

describeWithBrowser('the demo day on a phone', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    await phone.page.goto(service.url)
    await phone.page.getByRole('button', { name: 'Sat 17 Oct' }).click()
    await phone.page.locator('#sentence', { hasText: 'Blue Gate' }).waitFor()
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('shows in the ledger exactly what the service answers, printed to 10 Wh', async () => {
    const day = await budgetOf(service, { kind: 'meet-target' }, SATURDAY)
    const shown = await shownEnergies(phone.page, '#ledger')
    expect(shown.map((energy) => energy.wh)).toEqual(ledgerEnergies(day.ledger, day.reserve.wh))
    for (const { wh, printed, line } of shown) {
      expect(printed % 10, line).toBe(0)
      const lines = line === 'Came in' || line === 'Went out' || line === 'Balance' || line === 'losses' ? 14 : 1
      expect(Math.abs(printed - wh), line).toBeLessThanOrEqual(5 * lines)
    }
    await picture(phone.page, 'day')
  })

  it('prints lines that add up to the balance', async () => {
    const shown = await shownEnergies(phone.page, '#ledger')
    const printed = (line: string) => shown.find((energy) => energy.line === line)?.printed ?? Number.NaN
    const income = shown.slice(
      1,
      shown.findIndex((energy) => energy.line === 'Came in'),
    )
    expect(income.reduce((sum, energy) => sum + energy.printed, 0)).toBe(printed('Came in'))
    expect(printed('Opened with') + printed('Came in') - printed('Went out')).toBe(printed('Balance'))
    const sentence = await shownEnergies(phone.page, '#sentence')
    expect(sentence[0].printed).toBe(printed('Balance'))
  })

  it('says the same in its sentence, facts and stages', async () => {
    const day = await budgetOf(service, { kind: 'meet-target' }, SATURDAY)
    const sentence = await shownEnergies(phone.page, '#sentence')
    expect(sentence.map((energy) => energy.wh)).toEqual([day.closing.wh, day.marginWh])
    const facts = await shownEnergies(phone.page, '.facts')
    expect(facts.map((energy) => energy.wh)).toEqual([day.lowest.wh, day.targetMarginWh])
    const stages = await shownEnergies(phone.page, '.stages')
    expect(stages.map((energy) => energy.wh)).toEqual(day.stages.map((stage) => stage.closing.wh))
    expect(await phone.page.locator('#sentence').textContent()).toContain(`Hold ${day.heldKmh}`)
  })

  it('follows a step of the speed and says what it changed', async () => {
    const { page } = phone
    const before = await budgetOf(service, { kind: 'meet-target' }, SATURDAY)
    await page.getByRole('button', { name: 'Speed to hold: 1 km/h slower' }).click()
    await page.locator('#change', { hasText: '\u22121\u202fkm/h' }).waitFor()
    const speedKmh = (before.heldKmh ?? 0) - 1
    const now = await budgetOf(service, { kind: 'constant', speedKmh }, SATURDAY)
    const shown = await shownEnergies(page, '#ledger')
    expect(shown.map((energy) => energy.wh)).toEqual(ledgerEnergies(now.ledger, now.reserve.wh))
    expect(await page.locator('#change').textContent()).toMatch(/arrive \d+\smin later, [\d\s]+Wh more at close$/)
    expect(page.url()).toContain(`kmh=${speedKmh}`)
    await page.getByRole('button', { name: 'Fastest' }).click()
    await page.locator('#sentence', { hasText: `Hold ${before.heldKmh}` }).waitFor()
  })

  it('shows the account of one stage', async () => {
    const { page } = phone
    const day = await budgetOf(service, { kind: 'meet-target' }, SATURDAY)
    await page.getByRole('button', { name: 'Saltpan to Twin Wells' }).click()
    const shown = await shownEnergies(page, '#ledger')
    expect(shown.map((energy) => energy.wh)).toEqual(ledgerEnergies(day.stages[0].ledger, day.reserve.wh))
    expect(await page.locator('#sentence').textContent()).toContain('to Twin Wells: arrive')
    await page.getByRole('button', { name: 'Whole day' }).click()
  })

  it('sets a speed for each stage', async () => {
    const { page } = phone
    await page.getByRole('button', { name: 'By stage' }).click()
    await page.getByRole('textbox', { name: 'Speed on Saltpan to Twin Wells' }).fill('80')
    await page.locator('#sentence', { hasText: 'Hold the set speeds' }).waitFor()
    expect(decodeURIComponent(page.url())).toContain('saltpan-twin-wells:80')
    await page.getByRole('button', { name: 'Fastest' }).click()
    await page.locator('#sentence', { hasText: /Hold \d+/ }).waitFor()
  })

  it('reads the band by keyboard at any instant', async () => {
    const { page } = phone
    const slider = page.getByRole('slider', { name: 'Instant to read' })
    await slider.focus()
    await slider.press('ArrowRight')
    const first = await slider.getAttribute('aria-valuetext')
    await slider.press('ArrowRight')
    const second = await slider.getAttribute('aria-valuetext')
    expect(first).toMatch(/^\d\d:\d\d, km [\d\u202f]+, in [\d\u202f]+ W, out [\d\u202f]+ W, battery \d+ % charge$/)
    expect(second).not.toBe(first)
  })

  it('keeps day and speed through a reload', async () => {
    const { page } = phone
    await page.goto(`${service.url}/#/day?race=plateau-run&date=2026-10-18&kmh=71`)
    await page.reload()
    await page.locator('#sentence', { hasText: '71' }).waitFor()
    expect(await page.getByRole('button', { name: 'Sun 18 Oct' }).getAttribute('aria-pressed')).toBe('true')
  })

  it('scrolls sideways nowhere at 320 px', async () => {
    const { page } = phone
    await page.setViewportSize({ width: 320, height: 640 })
    await page.locator('svg.band').waitFor()
    expect(await overflowPx(page)).toBe(0)
    await picture(page, 'day-320')
    await page.getByText('The band as a table').click()
    expect(await overflowPx(page)).toBe(0)
    await page.getByRole('link', { name: 'Set-up' }).click()
    await page.getByRole('heading', { name: 'Set-up' }).waitFor()
    expect(await overflowPx(page)).toBe(0)
  })

  it('complained about nothing on the way', () => {
    expect(phone.complaints).toEqual([])
  })
})
