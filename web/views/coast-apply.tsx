import { useSignal } from '@preact/signals'
import type { CoastDownDocument } from '../../server/documents/coast-down-result.ts'
import { type Answer, documentOf, type Refusal, type Saved, save } from '../api.ts'
import { bodyOf, fittedBody, withFittedBody } from '../coast-form.ts'
import { askAgain, loadLists } from '../state.ts'
import { Conflict } from './conflict.tsx'

type TestCar = NonNullable<CoastDownDocument['car']>

interface Done {
  text: string
  /** The car as it was, and the version over which it would be put back; null once it is back. */
  undo: { car: object; version: number } | null
}

/** Puts a test's figures into its car as a new version, and takes them back. */
export function CoastApply({
  result,
  car,
  carDocument,
}: {
  result: CoastDownDocument
  car: TestCar
  carDocument: object | null
}) {
  const refused = useSignal<Refusal | null>(null)
  const done = useSignal<Done | null>(null)
  const fitted = fittedBody(result)
  const settle = async (answer: Answer<Saved>, next: (saved: Saved) => Done): Promise<void> => {
    refused.value = answer.refusal ?? null
    if (answer.value === undefined) return
    done.value = next(answer.value)
    await loadLists()
    askAgain()
  }
  const put = async (): Promise<void> => {
    const current = await documentOf('cars', car.id)
    if (current.value === undefined) {
      refused.value = current.refusal
      return
    }
    const before = current.value.document
    const next = withFittedBody(before, fitted)
    if (next === null) return
    await settle(await save('cars', car.id, next, car.version), ({ version }) => ({
      text: `Saved as version ${version} of ${car.name}.`,
      undo: { car: before, version },
    }))
  }
  const takeBack = async ({ car: before, version }: NonNullable<Done['undo']>): Promise<void> =>
    settle(await save('cars', car.id, before, version), (saved) => ({
      text: `Taken back: version ${saved.version} is ${car.name} as before the test.`,
      undo: null,
    }))
  const undo = done.value?.undo ?? null
  const shown = undo?.car ?? carDocument
  const old = shown === null ? null : bodyOf(shown)
  return (
    <section class="sec" aria-labelledby="coast-apply">
      <div class="sech">
        <h2 id="coast-apply">Put it into {car.name}</h2>
      </div>
      <dl class="change">
        <dt>Rolling coefficient</dt>
        <dd>
          {old?.rollingCoefficient ?? '–'} → <b>{fitted.rollingCoefficient}</b>
        </dd>
        <dt>Drag area, m²</dt>
        <dd>
          {old?.dragAreaM2 ?? '–'} → <b>{fitted.dragAreaM2}</b>
        </dd>
        {fitted.rollingAtC !== undefined && (
          <>
            <dt>Rolling found at, °C</dt>
            <dd>
              {old?.rollingAtC ?? '–'} → <b>{fitted.rollingAtC}</b>
            </dd>
          </>
        )}
      </dl>
      {refused.value !== null && <Conflict refusal={refused.value} />}
      {refused.value?.status === 412 && (
        <p class="note">Work the test out again; it then takes the car as it is now.</p>
      )}
      {done.value === null && (
        <button type="button" class="btn" onClick={() => void put()}>
          Save as a new version of {car.name}
        </button>
      )}
      <div role="status">
        {done.value !== null && (
          <p>
            <b>{done.value.text}</b>
          </p>
        )}
      </div>
      {undo !== null && (
        <button type="button" class="btn line" onClick={() => void takeBack(undo)}>
          Take it back
        </button>
      )}
    </section>
  )
}
