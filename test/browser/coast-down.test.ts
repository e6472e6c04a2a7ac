import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { CarDocument } from '../../server/documents/car.ts'
import { COAST_TABLE } from '../../server/api/examples/coast-down.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'

const PATIENCE_MS = 120_000

describeWithBrowser('a coast-down brought in by the client', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  const give = async (name: string, text: string): Promise<void> => {
    const log = { name, mimeType: 'text/csv', buffer: Buffer.from(text) }
    await phone.page.getByLabel('Log of the runs').setInputFiles(log)
    await phone.page.getByRole('button', { name: 'Find rolling and drag' }).click()
  }
  const car = async (): Promise<{ version: number; document: CarDocument }> => {
    const answer = await phone.page.context().request.get(`${service.url}/api/v1/cars/weaver-2`)
    return answer.json()
  }

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

  it('is found under Set-up, and asks for the air first', async () => {
    const { page } = phone
    await page.goto(`${service.url}/#/set-up`)
    await page.getByRole('link', { name: 'Coast-down' }).click()
    await page.getByRole('heading', { name: 'Coast-down' }).waitFor()
    expect(await page.locator('main').innerText()).toContain('A second person logs')
    expect(await page.locator('.tabs [aria-current="page"]').innerText()).toBe('Set-up')
    await page.getByText('empty: the car’s', { exact: false }).waitFor()
    expect(await page.getByRole('button', { name: 'Find rolling and drag' }).isDisabled()).toBe(true)
    await page.getByLabel('Temperature, °C').fill('18')
    await page.getByLabel('Pressure, hPa').fill('884')
    await page.getByLabel('Humidity, %').fill('35')
    await page.getByLabel('Mass on the day, kg').fill('268')
    expect(await faults(page)).toEqual([])
  })

  it('of one direction is refused in plain words, a wrong cell by its line', async () => {
    const { page } = phone
    const rows = COAST_TABLE.split('\n').filter((row) => !row.endsWith('back'))
    await give('one-way.csv', rows.join('\n'))
    const refused = page.locator('[data-refused]')
    await refused.getByText('2 of 2 runs go one way', { exact: false }).waitFor()
    expect(await refused.innerText()).toContain('No figures')
    await picture(page, 'coast-refused')
    await give('spoilt.csv', COAST_TABLE.replace('\n10,', '\nten,'))
    await refused.getByText('Line 4, column 1', { exact: false }).waitFor()
  })

  it('of both ways gives its sentence, its pictures and the figures of the service', async () => {
    const { page } = phone
    await give('saltpan.csv', COAST_TABLE)
    const found = page.locator('[data-coast-result]')
    await found.waitFor()
    expect((await found.locator('h2').first().innerText()).replaceAll('\u202f', ' ')).toMatch(
      /^Rolling 0\.00\d+ ± 0\.0000\d+, drag area 0\.1\d+ ± 0\.00\d+ m²; they pull against each other: correlation −0\.9\d\.$/,
    )
    expect(await found.locator('svg[role=img]').count()).toBe(4)
    expect(await faults(page)).toEqual([])
    await found.scrollIntoViewIfNeeded()
    await picture(page, 'coast-result')
    await page.locator('.holding').scrollIntoViewIfNeeded()
    await picture(page, 'coast-left')
    await page.locator('#coast-apply').scrollIntoViewIfNeeded()
    await page.mouse.wheel(0, 2000)
    await picture(page, 'coast-apply')
    await page.emulateMedia({ colorScheme: 'dark' })
    expect(await faults(page)).toEqual([])
    await picture(page, 'coast-result-dark')
    await page.emulateMedia({ colorScheme: 'light' })
    await page.setViewportSize({ width: 320, height: 640 })
    expect(await overflowPx(page)).toBe(0)
    await picture(page, 'coast-320')
    await page.evaluate('scrollTo(0, 0)')
    await picture(page, 'coast-320-top')
    await page.setViewportSize({ width: 390, height: 844 })
  })

  it('goes into the car as a new version, and is taken back', async () => {
    const { page } = phone
    const before = await car()
    await page.getByRole('button', { name: 'Save as a new version of' }).click()
    await page.getByText(`Saved as version ${before.version + 1}`, { exact: false }).waitFor()
    const after = await car()
    expect(after.version).toBe(before.version + 1)
    expect(after.document.body.rollingCoefficient).toBeCloseTo(0.0041, 3)
    expect(after.document.body).toMatchObject({ massKg: before.document.body.massKg, rollingAtC: 18 })
    expect({ ...after.document, body: null }).toEqual({ ...before.document, body: null })
    await picture(page, 'coast-saved')
    await page.getByRole('button', { name: 'Take it back' }).click()
    await page.getByText(`Taken back: version ${before.version + 2}`, { exact: false }).waitFor()
    expect((await car()).document).toEqual(before.document)
  })

  it('is not put over a car that somebody changed in the meantime', async () => {
    const { page } = phone
    await give('saltpan.csv', COAST_TABLE)
    await page.getByRole('button', { name: 'Save as a new version of' }).waitFor()
    const { version, document } = await car()
    const headers = { 'content-type': 'application/json', 'if-match': `"${version}"` }
    const changed = { ...document, name: 'Weaver 2, retyred' }
    await service.ask('/api/v1/cars/weaver-2', { method: 'PUT', headers, body: JSON.stringify(changed) })
    await page.getByRole('button', { name: 'Save as a new version of' }).click()
    await page.getByText('somebody changed it in the meantime', { exact: false }).waitFor()
    expect((await car()).document).toEqual(changed)
  })

  it('left no refusal of the content policy and no error behind', () => {
    expect(phone.complaints.filter((text) => !/status of 4(22|12)/.test(text))).toEqual([])
  })
})
