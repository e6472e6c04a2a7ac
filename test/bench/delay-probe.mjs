// Loaded into the service by the bench: tells on request how long its event loop was held up since the last request.
import { existsSync, readFileSync } from 'node:fs'
import { monitorEventLoopDelay } from 'node:perf_hooks'
import { isMainThread } from 'node:worker_threads'

/** Rests between two looks at the clock; every figure has about as much in it. [ms] */
const RESOLUTION_MS = 1

/** How long this thread has waited for a core since it began, as Linux counts it. [ms] */
function waitedMs() {
  const path = `/proc/self/task/${process.pid}/schedstat`
  return existsSync(path) ? Number(readFileSync(path, 'utf8').split(' ')[1]) / 1e6 : Number.NaN
}

if (isMainThread && process.send !== undefined) {
  const delay = monitorEventLoopDelay({ resolution: RESOLUTION_MS })
  delay.enable()
  let since = { atMs: performance.now(), waitedMs: waitedMs() }
  process.on('message', () => {
    const { min, max } = delay
    const at = (percent) => delay.percentile(percent) / 1e6
    const now = { atMs: performance.now(), waitedMs: waitedMs() }
    const waitedShare = (now.waitedMs - since.waitedMs) / (now.atMs - since.atMs)
    process.send({ minMs: min / 1e6, p50Ms: at(50), p99Ms: at(99), maxMs: max / 1e6, looks: delay.count, waitedShare })
    since = now
    delay.reset()
  })
  process.channel.unref()
}
