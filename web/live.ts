import { eventsAt, type RaceDay } from './crew.ts'

/** What the service tells about a day. */
const KINDS = ['forecast', 'reading', 'choice', 'missed'] as const
const AGAIN_MS = 5000

/**
 * Listens to a day until told to stop; the browser resumes after the last event by itself.
 *
 * A stream that was refused is asked for again after a while: the service may have been starting.
 */
export function listenTo(
  day: RaceDay,
  onNews: () => void,
  onWork: (kind: 'plan' | 'variant', told: string) => void,
): () => void {
  let source: EventSource | null = null
  let timer: ReturnType<typeof setTimeout> | undefined
  let wasLost = false
  const open = (): void => {
    source = new EventSource(eventsAt(day))
    for (const kind of KINDS) source.addEventListener(kind, onNews)
    for (const kind of ['plan', 'variant'] as const)
      source.addEventListener(kind, ({ data }: MessageEvent<string>) => onWork(kind, data))
    source.addEventListener('open', () => {
      // What happened while nobody listened may be more than the service keeps.
      if (wasLost) onNews()
      wasLost = false
    })
    source.addEventListener('error', () => {
      wasLost = true
      if (source?.readyState === EventSource.CLOSED) timer = setTimeout(open, AGAIN_MS)
    })
  }
  const close = (): void => {
    clearTimeout(timer)
    source?.close()
    source = null
  }
  // A browser opens six connections to a service at most; pages in the background leave theirs to the others.
  const see = (): void => {
    if (document.hidden) close()
    else if (source === null) {
      open()
      onNews()
    }
  }
  document.addEventListener('visibilitychange', see)
  if (!document.hidden) open()
  return () => {
    document.removeEventListener('visibilitychange', see)
    close()
  }
}
