import { readdirSync, readFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { runInNewContext } from 'node:vm'
import { beforeAll, describe, expect, test } from 'vitest'
import { planJson } from '../../server/compute/plan-jobs.ts'
import { whatIfJson } from '../../server/compute/what-if-jobs.ts'
import type { Outcome, Question, Reply, Told } from '../../web/phone/questions.ts'
import { demoRequest } from '../support/demo-race.ts'

const DATE = '2026-10-17'
const FROM = { at: `${DATE}T13:00:00.000Z`, stage: 'quiver-ridge-blue-gate', km: 90, chargePct: 55, speedKmh: 80 }
const VARIANTS = [
  { name: 'Less sun', change: { sunPct: 85 } },
  { name: 'All at once', change: { headwindMps: 2, massKg: 20, rollingPct: 120, openingPct: -3, stopMinutes: 8 } },
]
const asked = { date: DATE, from: FROM }

/** The worker as the client ships it, on this machine's own Math. */
function builtWorker(): (told: Told) => Reply[] {
  const assets = fileURLToPath(new URL('../../dist/web/assets/', import.meta.url))
  const name = readdirSync(assets).find((file) => /^phone-worker-.*\.js$/.test(file)) ?? 'phone-worker.js'
  const replies: Reply[] = []
  let hear = (_event: { data: Told }): void => {}
  const self = {
    addEventListener: (_kind: string, listener: typeof hear) => (hear = listener),
    postMessage: (reply: Reply) => replies.push(reply),
  }
  runInNewContext(readFileSync(`${assets}${name}`, 'utf8'), { self, structuredClone })
  return (told) => {
    hear({ data: told })
    return replies.splice(0)
  }
}

describe('the phone’s worker', { timeout: 120_000 }, () => {
  const documents = demoRequest()
  let tell: (told: Told) => Reply[]
  const told: string[] = []

  beforeAll(() => {
    tell = builtWorker()
    tell({ kind: 'documents', documents: documents as Extract<Told, { kind: 'documents' }>['documents'] })
  })

  function answer(question: Question): Outcome {
    for (const reply of tell({ kind: 'question', id: 1, question })) {
      if (reply.kind === 'outcome') return reply.outcome
      told.push(reply.progress.step)
    }
    throw new Error('the worker gave no outcome')
  }

  test('gives the service’s plan of the rest of a day letter for letter, and says how far it is', () => {
    expect(answer({ kind: 'plan', asked })).toEqual({ kind: 'answer', text: planJson({ ...documents, ...asked }) })
    expect(told).toContain('Looking for the best speeds')
  })

  test('gives the service’s answers to changes letter for letter, whatever was asked before', () => {
    const wanted = whatIfJson({ ...documents, ...asked, variants: VARIANTS })
    const ask = (variants: typeof VARIANTS) => answer({ kind: 'what-if', asked: { ...asked, variants } })
    expect(ask(VARIANTS)).toEqual({ kind: 'answer', text: wanted })
    expect(ask(VARIANTS.toReversed())).toMatchObject({ kind: 'answer' })
    expect(ask(VARIANTS)).toEqual({ kind: 'answer', text: wanted })
    const later = { ...asked, targetPct: 30 }
    expect(answer({ kind: 'what-if', asked: { ...later, variants: VARIANTS } })).toEqual({
      kind: 'answer',
      text: whatIfJson({ ...documents, ...later, variants: VARIANTS }),
    })
  })

  test.each([
    ['a place beyond the stage', { ...asked, from: { ...asked.from, km: 900 } }, 'from.km'],
    ['a charge that cannot be', { ...asked, from: { ...asked.from, chargePct: 120 } }, 'from.chargePct'],
    ['a day that the race does not have', { ...asked, date: '2026-10-20' }, 'date'],
  ])('refuses %s by its field', (_what, wrong, field) => {
    const refusal = answer({ kind: 'plan', asked: wrong })
    expect(refusal).toMatchObject({ kind: 'refused', errors: [{ field }] })
  })

  test('refuses a change by its field', () => {
    const variants = [{ name: 'One', change: { trackerOff: 'attic' } }]
    expect(answer({ kind: 'what-if', asked: { ...asked, variants } })).toMatchObject({
      kind: 'refused',
      errors: [{ field: 'variants[0].change.trackerOff' }],
    })
  })
})
