import type { Browser, Locator } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { SkyInput } from '../../server/documents/sky.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'

const PATIENCE_MS = 120_000

/** A typical year of one day, as the trade writes it: eight lines of header, then hours. */
const EPW = [
  'LOCATION,Saltpan,-,XXX,invented,0,-31,21,2,1180',
  'DESIGN CONDITIONS,0',
  'TYPICAL/EXTREME PERIODS,0',
  'GROUND TEMPERATURES,0',
  'HOLIDAYS/DAYLIGHT SAVINGS,No,0,0,0',
  'COMMENTS 1',
  'COMMENTS 2',
  'DATA PERIODS,1,1,Data,Sunday,1/1,12/31',
  ...Array.from({ length: 24 * 4 }, (_, i) => {
    const [day, hour] = [Math.floor(i / 24) + 16, (i % 24) + 1]
    const ghi = hour > 6 && hour < 19 ? 900 - 20 * (12 - hour) ** 2 : 0
    return `1999,10,${day},${hour},60,A,20,5,30,88000,0,0,0,${Math.max(ghi, 0)},9999,9999,0,0,0,0,90,3,2`
  }),
].join('\n')

describeWithBrowser('skies in the set-up', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  const comparing = (): Locator => phone.page.locator('details[data-compare]')

  /** What was measured: the demo's sky, a degree warmer and with a third more cloud. */
  const measure = async (): Promise<void> => {
    const stored = await (await service.ask('/api/v1/skies/plateau-forecast')).text()
    const sky: SkyInput = JSON.parse(stored).document
    const measured = {
      ...sky,
      name: 'Measured at the gates',
      source: 'measured',
      places: sky.places.map((place) => ({
        ...place,
        airTempC: place.airTempC?.map((value) => (value === null ? null : value + 1)),
        cloudPct: place.cloudPct?.map((value) => (value === null ? null : Math.min(value + 33, 100))),
        ghiWm2: place.ghiWm2?.map((value) => (value === null ? null : value * 0.8)),
      })),
    }
    const headers = { 'content-type': 'application/json' }
    const saved = await service.ask('/api/v1/skies/measured', {
      method: 'PUT',
      headers,
      body: JSON.stringify(measured),
    })
    expect(saved.status).toBe(201)
  }

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    await measure()
    await phone.page.goto(`${service.url}/#/set-up`)
    await comparing().locator('summary').first().click()
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('two are compared, and what the difference is worth is said first', async () => {
    await comparing().getByLabel('Forecast', { exact: true }).selectOption('plateau-forecast')
    await comparing().getByLabel('Measured', { exact: true }).selectOption('measured')
    await comparing().getByRole('checkbox').check()
    await comparing().getByRole('button', { name: 'Compare' }).click()
    const told = comparing().locator('[data-comparison]')
    await told.waitFor({ timeout: 60_000 })
    const text = (await told.innerText()).replaceAll('\u202f', ' ')
    expect(text).toMatch(/the forecast promised [\d ]+ Wh more at the close than the measured sky gives/)
    expect(text).toMatch(/the forecast had \d+ % more sun than was measured, over \d+ rows/)
    expect(text).toMatch(/Air, °C\s+−1.0\s+1.0\s+1.0/)
    await told.getByText('By hour of the day').first().click()
    await told.scrollIntoViewIfNeeded()
    await picture(phone.page, 'compared-skies')
    expect(await overflowPx(phone.page)).toBe(0)
    await phone.page.setViewportSize({ width: 320, height: 700 })
    expect(await overflowPx(phone.page)).toBe(0)
    await picture(phone.page, 'compared-skies-320')
    await phone.page.setViewportSize({ width: 390, height: 844 })
  })

  it('a typical year is known by its first line and read for the days of the race', async () => {
    const skies = phone.page.locator('details[data-add="skies"]')
    await skies.locator('summary').first().click()
    const file = { name: 'saltpan.epw', mimeType: 'text/plain', buffer: Buffer.from(EPW) }
    await skies.locator('input[type=file]').setInputFiles(file)
    const preview = skies.locator('[data-preview]')
    await preview.waitFor()
    expect(await skies.getByLabel('First day').inputValue()).toBe('2026-10-16')
    expect(await preview.innerText()).toContain('a typical year, not a forecast; its hours are of October 1999')
    await skies.getByLabel('Last day').fill('2026-10-25')
    await skies.getByRole('button', { name: 'Read these days' }).click()
    await skies.locator('[data-refused]', { hasText: '2026-10-20 hour 1' }).waitFor()
    await skies.getByLabel('Last day').fill('2026-10-18')
    await skies.getByRole('button', { name: 'Read these days' }).click()
    await preview.waitFor()
    await preview.scrollIntoViewIfNeeded()
    await picture(phone.page, 'typical-year')
    await preview.getByRole('button', { name: 'Save' }).click()
    await preview.getByText('Saved as saltpan, version 1.').waitFor()
    expect(phone.complaints.filter((text) => !text.includes('422'))).toEqual([])
  })
})
