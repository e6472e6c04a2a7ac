import { computed, effect } from '@preact/signals'
import { news } from '../crew-state.ts'
import { choice, worked } from '../state.ts'
import { warmPlanner } from './ask-day.ts'
import { fetchDocuments } from './fetch-documents.ts'

/** Fetched after the screens of the roadside, so that nothing waits for it. [ms] */
const AFTER_MS = 1500

/** Keeps on this device what it takes to go on without contact: the client itself and the race's documents. */
export function goOffline(): void {
  const register = navigator.serviceWorker?.register('./service-worker.js')
  // Over plain HTTP there is no service worker: the worker's code is loaded at once instead, for this page.
  if (register === undefined) warmPlanner()
  else register.catch(() => undefined)
  const whose = computed(() => {
    const { race, car, sky } = choice.value
    return JSON.stringify({ race, car, sky })
  })
  effect(() => {
    const of: Parameters<typeof fetchDocuments>[0] = JSON.parse(whose.value)
    // A budget that is worked out anew may rest on documents that were saved meanwhile.
    void [news.value, worked.value]
    if (of.race === '' || of.car === '' || of.sky === '') return undefined
    const timer = setTimeout(() => void fetchDocuments(of), AFTER_MS)
    return () => clearTimeout(timer)
  })
}
