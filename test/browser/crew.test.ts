import type { Browser, Page, Response as Answer } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import type { FollowedPointing, ReadingAnswer, SharedBudget } from '../../web/crew-types.ts'
import { clock } from '../../web/format.ts'
import { describeWithBrowser } from '../support/needs.ts'
import { faults } from './faults.ts'
import { openBrowser, openPhone, overflowPx, type Phone, picture } from './phone.ts'
import { type Service, startService } from './service.ts'
import { weigh } from './weigh.ts'

const PATIENCE_MS = 120_000
const DATE = '2026-10-17'
/** Four figures off the tail tracker, under its curve by less than it takes to doubt them: 197.2 W of 210 W. */
const FIGURES = ['42', '5', '110', '1.793']

/** The closing balance that a page says, exact to what the service answered. */
const CLOSING = "Number(document.querySelector('#sentence [data-wh]')?.dataset.wh)"

/** How long it takes until a page's closing balance is as wanted. [ms] */
async function msUntil(page: Page, isWanted: (wh: number) => boolean): Promise<number> {
  const from = Date.now()
  await expect.poll(async () => isWanted(await page.evaluate(CLOSING)), { interval: 20, timeout: 10_000 }).toBe(true)
  return Date.now() - from
}

const msUntilCloses = (page: Page, wh: number): Promise<number> => msUntil(page, (now) => now === wh)

describeWithBrowser('a crew with a tracker to read and a convoy to tell', { timeout: 60_000 }, () => {
  let service: Service
  let browser: Browser
  let phone: Phone
  let guest: Phone
  let shareUrl: string
  const shared = (init: RequestInit = {}): Promise<Response> =>
    fetch(`${service.url}/api/v1/share/budget`, { ...init, headers: { authorization: `Bearer ${tokenOf(shareUrl)}` } })

  beforeAll(async () => {
    service = await startService()
    browser = await openBrowser()
    phone = await openPhone(browser)
    guest = await openPhone(browser)
  }, PATIENCE_MS)

  afterAll(async () => {
    await phone?.close()
    await guest?.close()
    await browser?.close()
    await service?.stop()
  }, PATIENCE_MS)

  it('is told how to get in where it has no link', async () => {
    const { page } = guest
    await page.goto(service.url)
    await page.getByRole('heading', { name: 'This service opens with its owner’s link.' }).waitFor()
    expect(await page.locator('main').innerText()).toContain('npm run owner-link')
    await page.goto(`${service.url}/#owner=not-the-token`)
    await page.getByRole('heading', { name: 'This link is not valid any more.' }).waitFor()
    expect(page.url()).not.toContain('not-the-token')
    expect(await faults(page)).toEqual([])
  })

  it('gets in by the owner’s link, whose token leaves the address, and stays in', async () => {
    const { page } = phone
    const kB = await weigh(page, async () => {
      await page.goto(service.ownerLink)
      await page.locator('#sentence').waitFor()
    })
    expect(kB).toBeLessThan(50)
    expect(page.url()).not.toContain('owner=')
    await page.getByRole('button', { name: 'Sat 17 Oct' }).click()
    await page.locator('#sentence', { hasText: 'Blue Gate' }).waitFor()
    await page.reload()
    await page.locator('#sentence', { hasText: 'Blue Gate' }).waitFor()
    expect(await page.evaluate('document.cookie')).toBe('')
  })

  it('chooses what is followed, and shares it by a link and a code', async () => {
    const { page } = phone
    await page.getByRole('button', { name: 'Follow this' }).click()
    await page.getByText('The crew follows this, since').waitFor()
    await page.getByRole('button', { name: 'Share this day' }).click()
    const dialog = page.getByRole('dialog')
    await dialog.getByLabel('For whom').fill('Chase car')
    await dialog.getByRole('button', { name: 'Make a link' }).click()
    await dialog.getByRole('img', { name: 'QR code of the link for Chase car' }).waitFor()
    shareUrl = await dialog.locator('[data-share-url]').innerText()
    expect(shareUrl).toMatch(new RegExp(`^${service.url}/share#[\\w-]{43}$`))
    expect(await faults(page)).toEqual([])
    await picture(page, 'share-dialog')
    await dialog.getByRole('button', { name: 'Close' }).click()
  })

  it('shows the same day to whoever holds the link, and nothing else', async () => {
    const { page } = guest
    const kB = await weigh(page, async () => {
      await page.goto(shareUrl)
      await page.locator('#sentence', { hasText: 'Blue Gate' }).waitFor()
    })
    expect(kB).toBeLessThan(60)
    await page.getByText(/^Live; worked out/).waitFor()
    const told: SharedBudget = JSON.parse(await (await shared()).text())
    const day = told.budget.days.find((entry) => entry.date === DATE)
    expect(await page.evaluate(CLOSING)).toBe(day?.closing.wh)
    expect(await phone.page.evaluate(CLOSING)).toBe(day?.closing.wh)
    expect(await overflowPx(page)).toBe(0)
    expect(await faults(page)).toEqual([])
    await picture(page, 'share')
    const headers = { authorization: `Bearer ${tokenOf(shareUrl)}` }
    const others = ['races', 'cars/weaver-2', `races/plateau-run/days/${DATE}/budget`, 'races/plateau-run/readings']
    const answers = await Promise.all(others.map((path) => fetch(`${service.url}/api/v1/${path}`, { headers })))
    expect(answers.map(({ status }) => status)).toEqual([403, 403, 403, 403])
  })

  it('is told where to point the array, by the service’s own figures, on a narrow phone too', async () => {
    const { page } = phone
    await page.getByRole('link', { name: 'Stop' }).click()
    await page.getByRole('button', { name: 'Quiver Ridge' }).click()
    await page.locator('#stop-say', { hasText: 'true, tilt' }).waitFor()
    const answer = await service.ask(`/api/v1/races/plateau-run/days/${DATE}/pointing`)
    const { pointing }: FollowedPointing = JSON.parse(await answer.text())
    const told = pointing.days[0].windows.find(({ name, kind }) => kind === 'stop' && name === 'Quiver Ridge')
    if (told === undefined) throw new Error('no such stop')
    expect(await page.locator('.leave .at').innerText()).toBe(clock(told.to))
    const shown = await page.locator('.facts [data-wh]').evaluateAll((all) => all.map((one) => Number(one.dataset.wh)))
    expect(shown).toEqual([told.total.best.harvestWh, told.total.best.packWh, told.total.flat.costPackWh])
    const [first, second] = told.holds
    expect(await page.locator('#stop-say').innerText()).toContain(`turn to ${Math.round(first.turnToDeg)}°`)
    await page.locator('.holds button').nth(1).click()
    expect(await page.locator('#stop-say').innerText()).toContain(`tilt ${Math.round(second.tiltDeg)}°`)
    expect(await overflowPx(page)).toBe(0)
    expect(await faults(page)).toEqual([])
    await picture(page, 'stop')
    await page.setViewportSize({ width: 320, height: 700 })
    expect(await overflowPx(page)).toBe(0)
    expect(await faults(page)).toEqual([])
    await page.setViewportSize({ width: 390, height: 844 })
  })

  it('types four figures in under 15 s and has the hint while typing', async () => {
    const { page } = phone
    const fromMs = Date.now()
    await page.getByRole('link', { name: 'Log' }).click()
    await page.getByRole('button', { name: 'Tail' }).click()
    await page.locator('#inputV').click()
    for (const [i, text] of FIGURES.entries()) {
      // As fast as a thumb: five signs a second.
      await page.keyboard.type(text, { delay: 200 })
      if (i < FIGURES.length - 1) await page.keyboard.press('Enter')
    }
    await page.locator('.eff', { hasText: '93.9' }).waitFor()
    expect(Date.now() - fromMs).toBeLessThan(15_000)
    await page.locator('.hint b').waitFor()
    expect(await overflowPx(page)).toBe(0)
    expect(await faults(page)).toEqual([])
    await picture(page, 'log')
  })

  it('moves its budget and the open share page within 2 s by what the answer says', async () => {
    const { page } = phone
    const before: number = await guest.page.evaluate(CLOSING)
    const answered = page.waitForResponse((response: Answer) => response.url().includes('/readings'))
    await page.keyboard.press('Enter')
    const sharedMs = answered.then(async (response) => {
      const { moved }: ReadingAnswer = JSON.parse(await response.text())
      return msUntilCloses(guest.page, moved[0].closingWhAfter)
    })
    const answer: ReadingAnswer = JSON.parse(await (await answered).text())
    expect(answer.verdict).toBe('counts')
    expect(answer.moved.map(({ date }) => date)).toEqual([DATE])
    const [{ movedWh, closingWhBefore, closingWhAfter }] = answer.moved
    expect(closingWhBefore).toBe(before)
    expect(closingWhAfter - closingWhBefore).toBeCloseTo(movedWh, 6)
    expect(Math.abs(movedWh)).toBeGreaterThan(1)
    expect(await sharedMs).toBeLessThan(2000)
    await page.locator('[data-verdict="counts"]').waitFor()
    expect(await page.locator('[data-moved-wh]').getAttribute('data-moved-wh')).toBe(String(movedWh))
    await picture(page, 'log-sent')
    await page.getByRole('link', { name: 'Day' }).click()
    expect(await msUntilCloses(page, closingWhAfter)).toBeLessThan(2000)
  })

  it('sees the reading on its tracker’s curve, and what it moved', async () => {
    const { page } = phone
    await page.getByRole('link', { name: 'Trackers' }).click()
    const tail = page.locator('section', { has: page.getByRole('heading', { name: 'Tail tracker' }) })
    await tail.getByText('by 1 reading').waitFor()
    expect(await tail.getByRole('img').first().getAttribute('aria-label')).toContain('93.9 percent at 210 watts')
    await page.getByText(/^Sat 17 Oct\. Reading, Tail tracker: /).waitFor()
    expect(await overflowPx(page)).toBe(0)
    expect(await faults(page)).toEqual([])
    await picture(page, 'trackers')
    await tail.scrollIntoViewIfNeeded()
    await picture(page, 'trackers-tail')
  })

  it('sets a reading aside and takes it back, and every page follows', async () => {
    const { page } = phone
    const after: number = await guest.page.evaluate(CLOSING)
    const tail = page.locator('section', { has: page.getByRole('heading', { name: 'Tail tracker' }) })
    await tail.getByText('Readings: 1').click()
    await tail.getByRole('button', { name: 'Set aside' }).click()
    await msUntil(guest.page, (wh) => Math.abs(wh - after) > 1)
    await tail.getByRole('button', { name: 'Take back' }).click()
    await msUntilCloses(guest.page, after)
  })

  it('scrolls sideways nowhere at 320 px, and has no fault by night', async () => {
    const pages = [phone.page, guest.page]
    for (const page of pages) {
      await page.setViewportSize({ width: 320, height: 640 })
      await page.emulateMedia({ colorScheme: 'dark' })
    }
    for (const screen of ['Log', 'Trackers', 'Day']) {
      await phone.page.getByRole('link', { name: screen }).click()
      await phone.page.locator(screen === 'Log' ? '#inputV' : '.say').waitFor()
      expect(await overflowPx(phone.page), screen).toBe(0)
      expect(await faults(phone.page), screen).toEqual([])
      await picture(phone.page, `${screen.toLowerCase()}-320-dark`)
    }
    expect(await overflowPx(guest.page)).toBe(0)
    expect(await faults(guest.page)).toEqual([])
    for (const page of pages) await page.setViewportSize({ width: 390, height: 844 })
  })

  it('takes the link back: it is refused, its page says so and its open stream ends', async () => {
    const { page } = phone
    const headers = { authorization: `Bearer ${tokenOf(shareUrl)}` }
    const stream = await fetch(`${service.url}/api/v1/share/events`, { headers })
    expect(stream.status).toBe(200)
    const ended = stream.text()
    await page.getByRole('link', { name: 'Day' }).click()
    await page.getByRole('button', { name: 'Share this day' }).click()
    await page.getByRole('dialog').getByRole('button', { name: 'Take back Chase car' }).click()
    const fromMs = Date.now()
    await ended
    expect(Date.now() - fromMs).toBeLessThan(2000)
    await guest.page.getByRole('heading', { name: 'This link has ended.' }).waitFor({ timeout: 5000 })
    expect(await guest.page.locator('[data-wh]').count()).toBe(0)
    expect((await shared()).status).toBe(401)
    await picture(guest.page, 'share-ended')
    await guest.page.reload()
    await guest.page.getByRole('heading', { name: 'This link has ended.' }).waitFor()
  })

  it('signs out, and is outside then', async () => {
    const { page } = phone
    await page.reload()
    await page.getByRole('link', { name: 'Set-up' }).click()
    await page.getByRole('button', { name: 'Sign out of this browser' }).click()
    await page.getByRole('heading', { name: 'This service opens with its owner’s link.' }).waitFor()
  })

  it('left no refusal of the content policy and no error behind', () => {
    // Whoever has no link, or one that ended, is refused; the browser logs that by itself.
    expect([...phone.complaints, ...guest.complaints].filter((text) => !text.includes('status of 401'))).toEqual([])
  })
})

const tokenOf = (url: string): string => url.split('#')[1]
