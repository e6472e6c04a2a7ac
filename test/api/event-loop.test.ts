import { monitorEventLoopDelay } from 'node:perf_hooks'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { type Service, startService } from './service.ts'

const POINTS = 50_000
/** A reading on the event loop would hold it up for nearly the whole request, on any machine. */
const MOST_BLOCKED_SHARE = 0.25

let service: Service
beforeAll(async () => {
  service = await startService()
})
afterAll(() => service.close())

/** A winding road of 50,000 points about 12 m apart, with a wave in its heights. */
function longRoad(): string {
  const points = Array.from({ length: POINTS }, (_, i) => {
    const lat = -23 + i * 1e-4
    const lon = 16 + 0.02 * Math.sin(i / 900)
    return `<trkpt lat="${lat.toFixed(6)}" lon="${lon.toFixed(6)}"><ele>${(1200 + 80 * Math.sin(i / 700)).toFixed(1)}</ele></trkpt>`
  })
  return `<gpx version="1.1" xmlns="http://www.topografix.com/GPX/1/1"><trk><trkseg>\n${points.join('\n')}\n</trkseg></trk></gpx>`
}

test('a track of 50,000 points goes in and comes out while the service answers others', async () => {
  const request = { headers: { 'content-type': 'application/gpx+xml' }, payload: Buffer.from(longRoad()) }
  await service.app.inject('/api/health')
  const delay = monitorEventLoopDelay({ resolution: 5 })
  delay.enable()
  let answered = 0
  const asking = setInterval(() => {
    service.app.inject('/api/health', (_error, answer) => {
      if (answer?.statusCode === 200) answered++
    })
  }, 10)
  const startedMs = performance.now()
  const saved = await service.app.inject({ method: 'PUT', url: '/api/v1/routes/long', ...request })
  const read = await service.app.inject({ url: '/api/v1/routes/long' })
  const tookMs = performance.now() - startedMs
  clearInterval(asking)
  delay.disable()
  expect(saved.statusCode).toBe(201)
  expect(read.json().document.points.latDeg).toHaveLength(POINTS)
  const blockedMs = delay.max / 1e6
  console.log(`event loop: longest delay ${blockedMs.toFixed(0)} of ${tookMs.toFixed(0)} ms, ${answered} other answers`)
  expect(answered).toBeGreaterThan(5)
  expect(blockedMs).toBeLessThan(MOST_BLOCKED_SHARE * tookMs)
})
