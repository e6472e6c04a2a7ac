import { expect, test } from 'vitest'
import { changeDocument } from '../../server/documents/what-if.ts'
import { movedTo, SLIDERS, sliderText, whatIfText } from '../../web/phone/what-if-form.ts'

const plain = (text: string): string => text.replaceAll('\u202f', ' ').replaceAll('\u2212', '-')
const slider = (field: string) => {
  const found = SLIDERS.find((one) => one.field === field)
  if (found === undefined) throw new Error(field)
  return found
}

test('every slider stays within what the service takes, and rests where nothing changes', () => {
  for (const one of SLIDERS) {
    for (const value of [one.least, one.most, one.still])
      expect(changeDocument.safeParse({ [one.field]: value }).success, `${one.field} ${value}`).toBe(true)
    expect((one.still - one.least) / one.step).toBe(Math.round((one.still - one.least) / one.step))
    expect(movedTo({ [one.field]: one.most }, one, one.still)).toEqual({})
    expect(movedTo({}, one, one.most)).toEqual({ [one.field]: one.most })
  }
})

test('a slider says what it stands for', () => {
  expect(plain(sliderText(slider('sunPct'), 92))).toBe('92 %')
  expect(plain(sliderText(slider('headwindMps'), 2.5))).toBe('+2.5 m/s')
  expect(plain(sliderText(slider('stopMinutes'), -8))).toBe('-8 min')
  expect(sliderText(slider('massKg'), 0)).toBe('as planned')
})

const head = { date: '2026-10-17', zone: 'UTC', text: 'There is no plan.', method: '' }
const base = { arriveAt: '2026-10-17T16:00:00+02:00', closingWh: 2000 }
const holding = { name: 'Changed', holds: true, arriveAt: '2026-10-17T16:12:00+02:00', closingWh: 1853.2, lacksWh: 0 }
const missing = { name: 'Changed', holds: false, arriveAt: null, closingWh: null, laterMin: null }

test.each([
  [{ ...holding, laterMin: 12.2 }, 'Arrive 16:12, 12 min later; close with 1 850 Wh.'],
  [{ ...holding, laterMin: -3.6 }, 'Arrive 16:12, 4 min earlier; close with 1 850 Wh.'],
  [{ ...holding, laterMin: 0.2 }, 'Arrive 16:12, as without it; close with 1 850 Wh.'],
  [{ ...missing, lacksWh: 120 }, 'So reserve or target is missed: at least 120 Wh are lacking.'],
  [{ ...missing, lacksWh: 0 }, 'So the day’s road is not finished within its hours.'],
])('what changes do is one sentence: %o', (variant, text) => {
  expect(plain(whatIfText({ ...head, base, variants: [variant] }))).toBe(text)
})

test('a day without a plan says so', () => {
  expect(whatIfText({ ...head, base: null, variants: [] })).toBe('There is no plan.')
})
