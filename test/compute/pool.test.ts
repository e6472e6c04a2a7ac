import { constants, getPriority } from 'node:os'
import { afterEach, describe, expect, test } from 'vitest'
import { type ComputePool, computePool, type PoolOptions } from '../../server/compute/pool.ts'

type OddJobs = {
  double: (n: number) => number
  thread: (nothing: null) => number
  rank: (nothing: null) => number
  slow: (ms: number) => string
  forever: (nothing: null) => never
  refuse: (field: string) => never
  bug: (nothing: null) => never
  leave: (nothing: null) => never
  hoard: (nothing: null) => never
}

const workerUrl = new URL('./odd-worker.mjs', import.meta.url)
let opened: ComputePool<OddJobs>[] = []
const poolOf = (options: Partial<PoolOptions> = {}): ComputePool<OddJobs> => {
  const pool = computePool<OddJobs>({ workerUrl, size: 1, timeLimitMs: 15_000, heapLimitMb: 64, ...options })
  opened.push(pool)
  return pool
}
afterEach(async () => {
  await Promise.all(opened.map((pool) => pool.close()))
  opened = []
})

const fault = (code: string) => expect.objectContaining({ name: 'Fault', code })

describe('a pool of workers', () => {
  test('gives each job its own answer, however many wait', async () => {
    const pool = poolOf({ size: 2 })
    const answers = await Promise.all(Array.from({ length: 60 }, (_, n) => pool.run('double', n)))
    expect(answers).toEqual(Array.from({ length: 60 }, (_, n) => n * 2))
    expect(pool.isReady()).toBe(true)
  })

  test.runIf(process.platform === 'linux')('stands behind the event loop where cores are short', async () => {
    const own = getPriority()
    const rank = await poolOf().run('rank', null)
    expect(rank).toBe(Math.min(own + 10, constants.priority.PRIORITY_LOW))
    expect(getPriority()).toBe(own)
  })

  test('works on two jobs at once with two workers', async () => {
    const pool = poolOf({ size: 2 })
    const [a, , b] = await Promise.all([pool.run('thread', null), pool.run('slow', 50), pool.run('thread', null)])
    expect([a, b].every((id) => id > 0)).toBe(true)
    const slow = pool.run('slow', 3000)
    expect(await pool.run('double', 2)).toBe(4)
    expect(await slow).toBe('done')
  })

  test('passes on what a job refuses, field by field', async () => {
    const refused = poolOf().run('refuse', 'panels[0]')
    await expect(refused).rejects.toMatchObject({
      code: 'invalid-document',
      errors: [{ field: 'panels[0]', detail: 'expected better' }],
    })
  })

  test('stops a job at its time limit, and the next job is done', async () => {
    const pool = poolOf({ timeLimitMs: 2000 })
    await pool.run('double', 1)
    const startedMs = performance.now()
    await expect(pool.run('forever', null)).rejects.toEqual(fault('took-too-long'))
    expect(performance.now() - startedMs).toBeGreaterThan(1900)
    expect(await pool.run('double', 21)).toBe(42)
  })

  test('gives a job of several parts the limit for each', async () => {
    const pool = poolOf({ timeLimitMs: 2000 })
    await pool.run('double', 1)
    expect(await pool.run('slow', 2500, undefined, undefined, 3)).toBe('done')
    await expect(pool.run('slow', 2500)).rejects.toEqual(fault('took-too-long'))
  })

  test.each([
    ['throws', 'bug', 'compute-failed'],
    ['ends its worker', 'leave', 'compute-failed'],
    ['fills the memory', 'hoard', 'too-complex'],
  ] as const)('a job that %s fails alone', async (_, job, code) => {
    const pool = poolOf()
    const bad = pool.run(job, null)
    const waiting = pool.run('double', 21)
    await expect(bad).rejects.toEqual(fault(code))
    expect(await waiting).toBe(42)
  })

  test('keeps the cause of a crash for the log and out of the message', async () => {
    const error: unknown = await poolOf()
      .run('bug', null)
      .catch((thrown: unknown) => thrown)
    expect(error).toMatchObject({ cause: expect.stringContaining('a bug in the job') })
    expect(String(error)).not.toContain('a bug in the job')
  })

  test('refuses work beyond its queue', async () => {
    const pool = poolOf({ queueLimit: 2 })
    const running = pool.run('slow', 500)
    const waiting = [pool.run('double', 1), pool.run('double', 2)]
    await expect(pool.run('double', 3)).rejects.toEqual(fault('busy'))
    expect(await running).toBe('done')
    expect(await Promise.all(waiting)).toEqual([2, 4])
    expect(await pool.run('double', 3)).toBe(6)
  })

  test('takes a waiting job back without doing it', async () => {
    const pool = poolOf()
    const running = pool.run('slow', 500)
    const controller = new AbortController()
    const taken = pool.run('forever', null, controller.signal)
    controller.abort(new Error('gone'))
    await expect(taken).rejects.toThrow('gone')
    expect(await running).toBe('done')
    expect(await pool.run('double', 1)).toBe(2)
  })

  test('takes a running job back at once', async () => {
    const pool = poolOf()
    const controller = new AbortController()
    const taken = pool.run('forever', null, controller.signal)
    setTimeout(() => controller.abort(new Error('gone')), 300)
    await expect(taken).rejects.toThrow('gone')
    expect(await pool.run('double', 1)).toBe(2)
  })

  test('does nothing for whoever is gone already', async () => {
    await expect(poolOf().run('forever', null, AbortSignal.abort(new Error('gone')))).rejects.toThrow('gone')
  })

  test('a late abort leaves the answer and the worker alone', async () => {
    const pool = poolOf()
    const controller = new AbortController()
    const before = await pool.run('thread', null, controller.signal)
    controller.abort()
    expect(await pool.run('thread', null)).toBe(before)
  })

  test('fails what waits and what runs when it closes', async () => {
    const pool = poolOf()
    const jobs = [pool.run('forever', null), pool.run('double', 1)].map((job) => job.catch((error: unknown) => error))
    await pool.close()
    expect(await Promise.all(jobs)).toEqual([fault('stopping'), fault('stopping')])
    await expect(pool.run('double', 1)).rejects.toEqual(fault('stopping'))
    expect(pool.isReady()).toBe(false)
  })

  test('whose worker cannot load says so for each job and does not spin', async () => {
    const pool = poolOf({ workerUrl: new URL('./no-such-worker.mjs', import.meta.url) })
    await expect(pool.run('double', 1)).rejects.toEqual(fault('compute-failed'))
    await expect(pool.run('double', 1)).rejects.toEqual(fault('compute-failed'))
    expect(pool.isReady()).toBe(false)
  })
})
