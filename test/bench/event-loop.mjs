import { startService } from './service.mjs'

const RACE = '/api/v1/races/plateau-run'
const DAY = '2026-10-17'
const DOCUMENTS = { carId: 'weaver-2', skyId: 'plateau-forecast' }
const ASK_EVERY_MS = 100
const LOOK_EVERY_MS = 500
const ORDINARY = [
  '/api/v1/races',
  `${RACE}/days`,
  `${RACE}/days/${DAY}/budget`,
  '/api/v1/cars/weaver-2',
  `${RACE}/race-plans`,
  '/api/health',
]

const pause = (ms) => new Promise((over) => setTimeout(over, ms))

/** Asks one ordinary thing after the other. @returns what stops it and gives the time of each answer, shortest first */
function crew({ ask }) {
  const times = []
  const over = new AbortController()
  const asking = (async () => {
    for (let i = 0; !over.signal.aborted; i++) {
      const sentMs = performance.now()
      await ask('GET', ORDINARY[i % ORDINARY.length])
      times.push(performance.now() - sentMs)
      await pause(ASK_EVERY_MS)
    }
  })()
  return async () => {
    over.abort()
    await asking
    return times.sort((a, b) => a - b)
  }
}

/**
 * Delay of the service's event loop while plans are worked out and ordinary requests are answered: wall time between
 * two looks at the clock that are meant to be 1 ms apart, that millisecond included.
 *
 * @param {number} plans  race plans at once
 */
export async function eventLoopBench(plans = 4) {
  const service = await startService()
  try {
    const speeds = { kind: 'constant', speedKmh: 80 }
    await service.ask('PUT', `${RACE}/days/${DAY}/choice`, { ...DOCUMENTS, speeds })
    await service.delay()
    const restOver = crew(service)
    await pause(3000)
    await restOver()
    const rest = await service.delay()
    const fromMs = performance.now()
    const workOver = crew(service)
    const orders = Array.from({ length: plans }, (_, i) =>
      service.ask('POST', `${RACE}/race-plans`, { ...DOCUMENTS, seed: i + 1 }),
    )
    const open = new Set((await Promise.all(orders)).map(({ id }) => id))
    while (open.size > 0) {
      await pause(LOOK_EVERY_MS)
      for (const id of open) {
        const { state, fault } = await service.ask('GET', `/api/v1/race-plans/${id}`)
        if (state === 'failed') throw new Error(`a race plan failed: ${fault.detail}`)
        if (state === 'done') open.delete(id)
      }
    }
    const times = await workOver()
    const work = await service.delay()
    const answerP99Ms = times[Math.ceil(times.length * 0.99) - 1]
    return { rest, work, tookS: (performance.now() - fromMs) / 1000, answered: times.length, answerP99Ms }
  } finally {
    await service.stop()
  }
}
