import type { LightMyRequestResponse } from 'fastify'
import { ERRORS } from '../../server/errors.ts'
import type { BudgetDocument, DayBudget } from '../../server/documents/budget.ts'
import type { PointingDocument } from '../../server/documents/pointing.ts'
import type { TrackerDaysDocument } from '../../server/documents/tracker-days.ts'
import type { Attempt } from './attempt.ts'
import { isObject, isRelated } from './json-path.ts'

interface Named {
  field?: unknown
  detail?: unknown
  line?: unknown
}

/** Errors of an address or a method, which have no field. */
const FIELDLESS = new Set([
  'not-found',
  'method-not-allowed',
  'bad-address',
  'bad-request',
  'empty-body',
  'other-host',
  'other-origin',
  'no-such-document',
  'no-such-version',
  'no-such-day',
  'no-such-forecast',
  'no-such-example',
  'too-large',
  'not-signed-in',
  'link-revoked',
  'no-such-reading',
  'no-such-link',
  'nothing-followed',
])

/** Largest refusal: a hundred problems in a line or two each. [bytes] */
const LONGEST_REFUSAL = 64_000

/** What is wrong with an answer; null where nothing is. */
export function complaint(attempt: Attempt, answer: LightMyRequestResponse): string | null {
  const { statusCode, body } = answer
  if (statusCode >= 500) return `answered ${statusCode}`
  if (statusCode >= 400) return refusalComplaint(attempt, answer)
  if (attempt.isWrong) return `accepted with ${statusCode}`
  if (statusCode === 204 || statusCode === 304) return body === '' ? null : `${statusCode} with a body`
  if (statusCode !== 200 && statusCode !== 201) return `answered ${statusCode}`
  if (!String(answer.headers['content-type']).startsWith('application/json')) return null
  if (attempt.yields === 'tracker-days') return trackersComplaint(answer.json())
  if (attempt.yields === 'pointing') return pointingComplaint(answer.json())
  return attempt.yields === 'budget' ? budgetComplaint(budgetIn(answer)) : null
}

export const budgetIn = (answer: LightMyRequestResponse): BudgetDocument => {
  const body = answer.json()
  return body.budget ?? body
}

function refusalComplaint({ names, request }: Attempt, answer: LightMyRequestResponse): string | null {
  const { statusCode, body, headers } = answer
  if (headers['content-type'] !== 'application/problem+json; charset=utf-8') return `${statusCode} is no problem+json`
  if (request.method === 'HEAD') return null
  const problem: unknown = JSON.parse(body)
  if (!isObject(problem) || !Array.isArray(problem.errors)) return 'a refusal without errors'
  if (problem.status !== statusCode || !Object.hasOwn(ERRORS, String(problem.code)))
    return 'a refusal of another status'
  if (body.length > LONGEST_REFUSAL) return `a refusal of ${body.length} bytes`
  if (/\.[jt]s:\d+:\d+|node_modules|\/server\//.test(body)) return 'a refusal that shows the inside'
  return errorsComplaint(String(problem.code), problem.errors, names)
}

function errorsComplaint(code: string, errors: Named[], names: string | null): string | null {
  if (errors.length === 0) return FIELDLESS.has(code) ? null : `${code} names no field`
  for (const { field, detail } of errors)
    if (typeof field !== 'string' || field === '' || typeof detail !== 'string' || detail.length < 8)
      return `${code} with an empty field or detail`
  const isByLine = code === 'bad-json' || code === 'invalid-file'
  if (isByLine && !errors.some(({ line }) => Number(line) >= 1)) return `${code} names no line`
  if (names === null || isByLine || errors.some(({ field }) => isRelated(String(field), names))) return null
  return `${code} does not name ${names} but ${String(errors[0].field)}`
}

/** The energy moved that the ledger may miss its closing by, and a nothing for days on which none is. */
const GAP_SHARE = 1e-6
const GAP_WH = 1e-9

/** What is wrong with a budget: a figure that is none, or a ledger that does not close. */
export function budgetComplaint(budget: BudgetDocument): string | null {
  if (budget.days.length === 0) return 'a budget without days'
  for (const day of budget.days) {
    if (!numbersIn(day).every(Number.isFinite)) return `${day.date} has a figure that is no number`
    for (const part of [day, ...day.stages]) {
      const gapWh = ledgerGapWh(part.ledger)
      if (!(gapWh <= GAP_SHARE * movedWh(day) + GAP_WH)) return `${day.date}: a ledger misses by ${gapWh} Wh`
    }
    if (day.series.chargePct.some((pct) => pct < 0 || pct > 100)) return `${day.date}: a charge outside 0 to 100 %`
  }
  return null
}

/** What is wrong with a tracker report: a figure that is none, more taken than there was, more out than in. */
export function trackersComplaint(report: TrackerDaysDocument): string | null {
  if (report.days.length === 0) return 'a report without days'
  if (!numbersIn(report).every(Number.isFinite)) return 'a figure that is no number'
  for (const { name, parts, path } of report.days.flatMap((day) => day.trackers)) {
    if (path.atMs.length > 200) return `${name}: a path of ${path.atMs.length} steps`
    for (const { bestWh, inputWh, lossWh, edges } of parts) {
      const deniedWh = edges.reduce((sum, edge) => sum + edge.deniedWh, 0)
      if (inputWh + deniedWh > bestWh * (1 + GAP_SHARE) + GAP_WH) return `${name}: takes more than there is`
      if (lossWh < -GAP_WH || lossWh > inputWh * (1 + GAP_SHARE) + GAP_WH) return `${name}: loses ${lossWh} Wh`
    }
  }
  return null
}

/** Share by which an array that is off or flat may beat the pose told: the search's own bound, cells warmed by it. */
const BEATEN_SHARE = 0.02

/** What is wrong with a pointing table: a figure that is none, a pose that cannot be, being off that pays. */
export function pointingComplaint({ days }: PointingDocument): string | null {
  if (days.length === 0) return 'a table without days'
  if (!numbersIn(days).every(Number.isFinite)) return 'a figure that is no number'
  for (const { date, windows, noWindow } of days) {
    if ((windows.length === 0) !== (noWindow !== null)) return `${date}: no window and no reason, or both`
    for (const { kind, holds, total } of windows) {
      if (holds.some(({ tiltDeg }) => !(tiltDeg >= 0 && tiltDeg <= 90))) return `${date} ${kind}: a tilt beyond 90°`
      if (holds.some(({ turnToDeg }) => !(turnToDeg >= 0 && turnToDeg <= 360))) return `${date} ${kind}: no azimuth`
      const { best, flat, off } = total
      const mostW = best.stringsW * (1 + BEATEN_SHARE) + 0.01
      if ([flat, ...off].some(({ stringsW }) => stringsW > mostW)) return `${date} ${kind}: being off pays`
    }
  }
  return null
}

function ledgerGapWh(ledger: DayBudget['ledger']): number {
  const sum = (lines: { wh: number }[]) => lines.reduce((total, { wh }) => total + wh, 0)
  const { openingWh, income, spendings, shortWh, closingWh, cameInWh, wentOutWh } = ledger
  const gaps = [
    openingWh + sum(income) + shortWh - sum(spendings) - closingWh,
    cameInWh - sum(income),
    wentOutWh - sum(spendings),
  ]
  return Math.max(...gaps.map(Math.abs))
}

const movedWh = ({ ledger }: DayBudget): number =>
  ledger.cameInWh + ledger.spendings.reduce((sum, { wh }) => sum + Math.abs(wh), 0) + ledger.shortWh

function numbersIn(value: unknown): number[] {
  if (typeof value === 'number') return [value]
  return typeof value === 'object' && value !== null ? Object.values(value).flatMap(numbersIn) : []
}
