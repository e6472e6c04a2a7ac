import type { Kept, Outcome, Progress, Question, Reply, Told } from './questions.ts'

/** An outcome, or that a later question took its place, or that this browser could not work it out. */
export type PhoneAnswer = Outcome | { kind: 'outdated' } | { kind: 'failed'; detail: string }

/** Works days out on this device, one question at a time; the latest one wins. */
export interface PhonePlanner {
  ask(kept: Kept, question: Question, told?: (progress: Progress) => void): Promise<PhoneAnswer>
  /** Loads the worker's code, so that it is there without contact. */
  warm(): void
}

interface Asked {
  id: number
  kept: Kept
  question: Question
  told: (progress: Progress) => void
  settle: (answer: PhoneAnswer) => void
}

const tell = (worker: Worker, told: Told): void => worker.postMessage(told, [])

const startWorker = (): Worker => new Worker(new URL('./phone-worker.ts', import.meta.url), { type: 'module' })

/** A planner whose worker starts with the first question, and anew where an outdated one is ended. */
export function phonePlanner(): PhonePlanner {
  let thread: Worker | null = null
  let edition = ''
  let running: Asked | null = null
  let waiting: Asked | null = null
  let count = 0

  function threadNow(): Worker {
    if (thread !== null) return thread
    const fresh = startWorker()
    fresh.addEventListener('message', ({ data }: MessageEvent<Reply>) => hear(data))
    fresh.addEventListener('error', (event) => {
      event.preventDefault()
      end({ kind: 'failed', detail: event.message || 'Its code was not loaded.' })
      startNext()
    })
    thread = fresh
    edition = ''
    return fresh
  }

  function hear(reply: Reply): void {
    if (running === null || reply.id !== running.id) return
    if (reply.kind === 'progress') return running.told(reply.progress)
    const { settle } = running
    running = null
    settle(reply.outcome)
    startNext()
  }

  /** Ends the worker with what it works on. */
  function end(answer: PhoneAnswer): void {
    thread?.terminate()
    thread = null
    running?.settle(answer)
    running = null
  }

  function startNext(): void {
    if (running !== null || waiting === null) return
    running = waiting
    waiting = null
    const { id, kept, question } = running
    const to = threadNow()
    if (edition !== kept.edition) tell(to, { kind: 'documents', documents: kept.documents })
    edition = kept.edition
    tell(to, { kind: 'question', id, question })
  }

  return {
    ask(kept, question, told = () => {}) {
      return new Promise((settle) => {
        waiting?.settle({ kind: 'outdated' })
        waiting = { id: ++count, kept, question, told, settle }
        if (running !== null && !endsSoon(running, waiting)) end({ kind: 'outdated' })
        startNext()
      })
    },
    warm: () => void threadNow(),
  }
}

/** Changes to a day that is planned already take a moment, and ending the worker would lose that day. */
const endsSoon = (running: Asked, next: Asked): boolean =>
  running.question.kind === 'what-if' && dayOf(running) === dayOf(next)

function dayOf({ kept, question }: Asked): string {
  if (question.kind !== 'what-if') return ''
  const { variants: _variants, ...day } = question.asked
  return JSON.stringify([kept.edition, day])
}
