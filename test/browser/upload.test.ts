import type { Browser, Locator } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { describeWithBrowser } from '../support/needs.ts'
import { gpxOf, lineOfPoint, weatherOf } from './files.ts'
import { enter, openBrowser, openPhone, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { budgetOf, ledgerEnergies, shownEnergies } from './shown.ts'

const PATIENCE_MS = 120_000
const POINTS = 50_000
const DATE = '2026-10-17'

describeWithBrowser('files brought in by the client', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  const part = (kind: string): Locator => phone.page.locator(`details[data-add="${kind}"]`)
  const give = async (kind: string, name: string, text: string): Promise<void> => {
    const mimeType = name.endsWith('.gpx') ? 'application/gpx+xml' : 'text/csv'
    await part(kind)
      .locator('input[type=file]')
      .setInputFiles({ name, mimeType, buffer: Buffer.from(text) })
  }

  const sayPlace = async (): Promise<void> => {
    const said = { 'UTC offset of its times': '+02:00', Place: 'Plain', 'Height, m': '1200' }
    const placed = { ...said, 'Latitude, ° north': '-23', 'Longitude, ° east': '17.4' }
    for (const [label, value] of Object.entries(placed))
      await part('skies').getByLabel(label, { exact: true }).fill(value)
  }

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    await enter(phone, service)
    await phone.page.goto(`${service.url}/#/set-up`)
    for (const kind of ['routes', 'skies', 'race-day', 'cars']) await part(kind).locator('summary').first().click()
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('a GPX with one wrong latitude is refused with its line, and nothing is stored', async () => {
    await give('routes', 'spoilt.gpx', gpxOf(1000, { at: 700, latitude: '91.5' }))
    const refused = part('routes').locator('[data-refused]')
    await refused.waitFor()
    const text = await refused.innerText()
    expect(text).toContain(`Line ${lineOfPoint(700)}, column `)
    expect(text).toContain('91.5')
    expect(await part('routes').locator('[data-preview]').count()).toBe(0)
    await picture(phone.page, 'refused-route')
  })

  it('a GPX of 50,000 points is read, shown with its climb before and after, then saved', async () => {
    await give('routes', 'test road.gpx', gpxOf(POINTS))
    const preview = part('routes').locator('[data-preview]')
    await preview.waitFor({ timeout: 60_000 })
    const text = (await preview.innerText()).replaceAll('\u202f', ' ')
    expect(text).toMatch(/Points\s+50 000/)
    const climb = (words: string) => Number(new RegExp(`${words}\\s+([\\d ]+) m`).exec(text)?.[1].replaceAll(' ', ''))
    expect(climb('Climb as recorded')).toBeGreaterThan(climb('Climb after smoothing'))
    expect(climb('Climb after smoothing')).toBeGreaterThan(300)
    await preview.scrollIntoViewIfNeeded()
    await picture(phone.page, 'read-route')
    await preview.getByRole('button', { name: 'Save' }).click()
    await preview.getByText('Saved as test-road, version 1.').waitFor({ timeout: 60_000 })
  })

  it('a weather table is refused for what it does not say, then read with what is said by hand', async () => {
    await give('skies', 'plain.csv', weatherOf(DATE))
    const skies = part('skies')
    const refusal = skies.locator('[data-refused]')
    await refusal.waitFor()
    expect(await refusal.innerText()).toMatch(/Line 1, column \d+, cloudPct: expected what its stamps speak for/)
    await picture(phone.page, 'refused-sky')
    await skies.getByLabel('A value speaks for').selectOption('preceding')
    await sayPlace()
    await skies.getByRole('button', { name: 'Read the table' }).click()
    const preview = skies.locator('[data-preview]')
    await preview.waitFor()
    expect(await preview.innerText()).toContain('Cloud cover, Air temperature, Humidity, Wind speed')
    await preview.getByRole('button', { name: 'Save' }).click()
    await preview.getByText('Saved as plain, version 1.').waitFor()
  })

  it('a column with a name nobody knows is mapped by hand', async () => {
    const strange = weatherOf(DATE).replace('cloud cover (%)', 'Bewoelkung')
    await give('skies', 'strange.csv', strange)
    const skies = part('skies')
    await skies.getByLabel('A value speaks for').selectOption('preceding')
    await sayPlace()
    await skies.getByRole('button', { name: 'Read the table' }).click()
    await skies.locator('[data-refused]').waitFor()
    await skies.getByText('Say by hand what its columns are').click()
    await skies.getByLabel('Bewoelkung', { exact: true }).selectOption('Cloud cover')
    await skies.getByLabel('Unit of Bewoelkung').fill('%')
    await skies.getByRole('button', { name: 'Read the table' }).click()
    await skies.locator('[data-preview]').waitFor()
  })

  it('a race day is made on the route and gives the budget that the service answers', async () => {
    const { page } = phone
    const form = part('race-day')
    await form.getByLabel('Name of the race').fill('Test day')
    await form.getByLabel('Route', { exact: true }).selectOption('test-road')
    await form.getByLabel('Start', { exact: true }).fill('Saltpan')
    await form.getByLabel('Finish', { exact: true }).fill('Blue Gate')
    await form.getByLabel('Date', { exact: true }).fill(DATE)
    await form.getByLabel('Time zone').fill('Africa/Windhoek')
    await form.getByLabel('Opening charge, %').fill('80')
    await form.getByLabel('Target at the end, %').fill('30')
    await form.getByRole('button', { name: 'Add a stop' }).click()
    await form.getByRole('button', { name: 'Check the race day' }).click()
    expect(await form.locator('.problems').innerText()).toContain('Stop 1: needs a name')
    await form.getByLabel('Stop 1', { exact: true }).fill('Twin Wells')
    await form.getByLabel('at km').fill('160')
    await form.getByRole('button', { name: 'Check the race day' }).click()
    await form.getByRole('button', { name: 'Save' }).click()
    await page.locator('ul[data-kind="races"]').getByText('Test day').waitFor()
    await page.locator('ul[data-kind="skies"]').getByText('plain', { exact: false }).first().click()
    await page.getByRole('link', { name: 'Day' }).click()
    await page.locator('#sentence', { hasText: 'Blue Gate' }).waitFor({ timeout: 60_000 })
    const names = { race: 'test-day', car: 'weaver-2', sky: 'plain', date: DATE }
    const day = await budgetOf(service, { kind: 'meet-target' }, names)
    const shown = await shownEnergies(page, '#ledger')
    expect(shown.map((energy) => energy.wh)).toEqual(ledgerEnergies(day.ledger, day.reserve.wh))
    expect(day.drivenKm).toBeGreaterThan(290)
    await picture(page, 'own-day')
  })

  it('a name that is taken is explained and may be replaced', async () => {
    const { page } = phone
    await page.getByRole('link', { name: 'Set-up' }).click()
    await part('routes').locator('summary').first().click()
    await give('routes', 'test road.gpx', gpxOf(500))
    const preview = part('routes').locator('[data-preview]')
    await preview.getByRole('button', { name: 'Save' }).click()
    await preview.getByText('Not saved: there is one of this name already.').waitFor()
    await preview.getByRole('button', { name: 'Replace it' }).click()
    await preview.getByText('Saved as test-road, version 2.').waitFor()
  })

  it('a car starts from the worked example, says where its JSON breaks, and is refused by field', async () => {
    const { page } = phone
    const cars = part('cars')
    await cars.locator('summary').first().click()
    await cars.getByLabel('Or start from').selectOption('The worked example')
    const text = cars.getByLabel('The car as JSON')
    await expect.poll(() => text.inputValue()).toContain('"massKg"')
    const example = await text.inputValue()
    await text.fill(example.replace(/"massKg": [\d.]+/, '"massKg": '))
    expect(await cars.locator('.problems').innerText()).toMatch(/^Line \d+, column \d+:/)
    await text.fill(example.replace(/"massKg": [\d.]+/, '"massKg": 5'))
    await cars.getByRole('button', { name: 'Save' }).click()
    await cars.locator('.problems', { hasText: 'body.massKg' }).waitFor()
    await text.fill(example)
    await cars.getByRole('textbox', { name: 'Name', exact: true }).fill('Spare car')
    await cars.getByRole('button', { name: 'Save' }).click()
    await page.locator('ul[data-kind="cars"]').getByText('Spare car').waitFor()
  })

  it('a change that somebody else made in the meantime is not overwritten unasked', async () => {
    const cars = part('cars')
    await cars.getByLabel('Or start from').selectOption('Spare car')
    await expect.poll(() => cars.getByLabel('The car as JSON').inputValue()).toContain('Spare car')
    const address = '/api/v1/cars/spare-car'
    const { document } = JSON.parse(await (await service.ask(address)).text())
    const headers = { 'content-type': 'application/json', 'if-match': '"1"' }
    const theirs = await service.ask(address, { method: 'PUT', headers, body: JSON.stringify(document) })
    expect(theirs.status).toBe(200)
    await cars.getByRole('button', { name: 'Save' }).click()
    await cars.getByText('Not done: somebody changed it in the meantime.').waitFor()
    await cars.getByRole('button', { name: 'Replace it' }).click()
    await cars.getByText('Saved as spare-car, version 3.').waitFor()
  })

  it('a document is removed only after a question', async () => {
    const { page } = phone
    const cars = page.locator('ul[data-kind="cars"]')
    await cars.getByRole('button', { name: 'Remove Spare car' }).click()
    await cars.getByRole('button', { name: 'Keep it' }).click()
    await cars.getByRole('button', { name: 'Remove Spare car' }).click()
    await cars.getByRole('button', { name: 'Remove it' }).click()
    await cars.getByText('Spare car').first().waitFor({ state: 'detached' })
  })

  it('left no refusal of the content policy and no error behind', () => {
    // A refused request is logged by the browser itself as an error of the network.
    expect(phone.complaints.filter((text) => !/status of 4(22|28|12|00)/.test(text))).toEqual([])
  })
})
