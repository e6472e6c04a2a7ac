// A worker whose jobs go wrong in every way that a job can.
import { getPriority } from 'node:os'
import { threadId } from 'node:worker_threads'
import { Fault } from '../../dist/server/errors.js'
import { serveJobs } from '../../dist/server/compute/serve-jobs.js'

const wait = (ms) => Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, ms)

serveJobs({
  double: (n) => n * 2,
  thread: () => threadId,
  rank: () => getPriority(),
  slow: (ms) => {
    wait(ms)
    return 'done'
  },
  forever: () => {
    for (;;);
  },
  refuse: (field) => {
    throw new Fault('invalid-document', 'refused', { errors: [{ field, detail: 'expected better' }] })
  },
  bug: () => {
    throw new TypeError('a bug in the job')
  },
  leave: () => process.exit(3),
  hoard: () => {
    const kept = []
    for (;;) kept.push({ n: kept.length, text: `${kept.length}` })
  },
})
