import type { Browser } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { enter, openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'

const PATIENCE_MS = 120_000

describeWithBrowser('every screen', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  const day = '#/day?race=plateau-run&date=2026-10-17'
  const show = async (hash: string): Promise<void> => {
    await phone.page.goto('about:blank')
    await phone.page.goto(`${service.url}/${hash}`)
    const wanted = hash.startsWith('#/day') ? '#sentence' : 'ul[data-kind="races"]'
    await phone.page.locator(wanted).waitFor()
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

  it('of the day has no fault that axe-core knows, by day and by night', async () => {
    for (const colorScheme of ['light', 'dark'] as const) {
      await phone.page.emulateMedia({ colorScheme })
      await show(day)
      await phone.page.getByText('The band as a table').click()
      expect(await faults(phone.page)).toEqual([])
      await phone.page.getByRole('button', { name: 'By stage' }).click()
      await phone.page.getByRole('button', { name: 'Distance' }).click()
      await phone.page.locator('.legs').waitFor()
      expect(await faults(phone.page)).toEqual([])
      await picture(phone.page, `distance-${colorScheme}`)
    }
  })

  it('of the set-up has no fault that axe-core knows, with every form open', async () => {
    for (const colorScheme of ['light', 'dark'] as const) {
      await phone.page.emulateMedia({ colorScheme })
      await show('#/set-up')
      for (const summary of await phone.page.locator('summary').all()) await summary.click()
      await phone.page.locator('.quiet').first().click()
      await phone.page.getByRole('button', { name: 'Add a stop' }).click()
      await phone.page.getByLabel('Weather file').setInputFiles({
        name: 'wrong.csv',
        mimeType: 'text/csv',
        buffer: Buffer.from('time,air temperature (°C)\n2026-10-17T01:00,x\n'),
      })
      await phone.page.locator('[data-refused]').waitFor()
      expect(await faults(phone.page)).toEqual([])
    }
    await phone.page.setViewportSize({ width: 320, height: 640 })
    expect(await overflowPx(phone.page)).toBe(0)
    await phone.page.setViewportSize({ width: 390, height: 844 })
  })

  it('wears the theme that was chosen', async () => {
    await phone.page.emulateMedia({ colorScheme: 'light' })
    await show('#/set-up')
    const paper = () => phone.page.evaluate('getComputedStyle(document.body).backgroundColor')
    expect(await paper()).toBe('rgb(255, 255, 255)')
    await phone.page.getByRole('button', { name: 'Lamp' }).click()
    expect(await paper()).toBe('rgb(10, 14, 21)')
    await phone.page.reload()
    await phone.page.locator('ul[data-kind="races"]').waitFor()
    expect(await paper()).toBe('rgb(10, 14, 21)')
    await phone.page.getByRole('button', { name: 'As the phone' }).click()
  })

  it('works by keyboard alone: the speed is stepped and typed', async () => {
    await show(day)
    const field = phone.page.getByRole('textbox', { name: 'Speed to hold' })
    const held = Number(await field.inputValue())
    await field.focus()
    await field.press('ArrowUp')
    await phone.page.locator('#change', { hasText: '+1\u202fkm/h' }).waitFor()
    await field.fill('500')
    await phone.page.getByText('A whole number from 5 to 200.').waitFor()
    await field.fill(String(held - 4))
    await phone.page.locator('#sentence', { hasText: `Hold ${held - 4}` }).waitFor()
    await phone.page.getByRole('button', { name: 'Speed to hold: 1 km/h faster' }).focus()
    await phone.page.keyboard.press('Enter')
    await phone.page.locator('#sentence', { hasText: `Hold ${held - 3}` }).waitFor()
  })

  it('has touch targets of 44 px for what is pressed on the road', async () => {
    await show(day)
    const sizes: number[] = await phone.page.evaluate(
      `[...document.querySelectorAll('.stepper button, .seg button, .days button, .tabs a, .read input')].map((e) => e.getBoundingClientRect().height)`,
    )
    expect(sizes.length).toBeGreaterThan(8)
    expect(Math.min(...sizes)).toBeGreaterThanOrEqual(44)
  })

  it('keeps the last figures without contact, says so, and goes on by itself', async () => {
    await show(day)
    const { page } = phone
    const balance = await page.locator('#ledger .close').innerText()
    await page.context().setOffline(true)
    await page.getByRole('button', { name: 'Speed to hold: 1 km/h faster' }).click()
    await page.getByText('The day could not be worked out: no contact.').waitFor()
    expect(await page.locator('#ledger .close').innerText()).toBe(balance)
    await page.getByText('Still shown: the answer of').waitFor()
    await page.getByText(/^Offline \d+\ss, showing what was last worked out/).waitFor({ timeout: 25_000 })
    await picture(page, 'offline')
    await page.context().setOffline(false)
    await page.locator('#change', { hasText: '+1\u202fkm/h' }).waitFor()
    expect(await page.locator('.refused').count()).toBe(0)
  })

  it('says why no budget can be made, where, and the way on', async () => {
    const race = JSON.parse(await (await service.ask('/api/v1/races/plateau-run')).text()).document
    race.days[0].stages[0].route = 'nowhere'
    const put = await service.ask('/api/v1/races/lost-race', {
      method: 'PUT',
      headers: { 'content-type': 'application/json' },
      body: JSON.stringify({ ...race, name: 'Lost race' }),
    })
    expect(put.status).toBe(201)
    await phone.page.goto('about:blank')
    await phone.page.goto(`${service.url}/#/day?race=lost-race&date=2026-10-17`)
    const refused = phone.page.locator('.refused')
    await refused.waitFor()
    expect(await refused.innerText()).toMatch(/^Day not worked out: a stage runs on a route that does not exist\./)
    expect(await refused.locator('.problems').innerText()).toContain('nowhere')
    await picture(phone.page, 'refused-day')
    await refused.getByRole('button', { name: 'Open the set-up' }).click()
    await phone.page.getByRole('heading', { name: 'Set-up' }).waitFor()
  })

  it('says in its sentence what limits and motor make of a speed that nobody can hold', async () => {
    await show('#/day?race=plateau-run&date=2026-10-16&kmh=200')
    expect((await phone.page.locator('#sentence').innerText()).replaceAll('\u202f', ' ')).toMatch(
      /^Hold 200 km\/h where limits and motor allow, 1?\d\d km\/h at most: /,
    )
  })
})
