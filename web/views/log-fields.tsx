import type { Ref } from 'preact'
import { useEffect, useRef } from 'preact/hooks'
import { figure, type Typed, unitOf } from '../log-reading.ts'
import { grouped } from '../format.ts'
import type { ReadingField } from '../crew-types.ts'
import { Wh } from './figures.tsx'

interface FieldsProps {
  trackers: string[]
  tracker: string
  typed: Typed
  isTried: boolean
  /** Sent: the figures stand as they are. */
  isFixed: boolean
  onTracker: (name: string) => void
  onType: (change: Partial<Typed>) => void
}

const SIDES = [
  { side: 'In', fields: ['inputV', 'inputA'] },
  { side: 'Out', fields: ['outputV', 'outputA'] },
] as const

/** Which tracker, and the four figures with the power at each side. */
export function LogFields({ trackers, tracker, typed, isTried, isFixed, onTracker, onType }: FieldsProps) {
  const first = useRef<HTMLInputElement>(null)
  useEffect(() => {
    if (!isFixed) first.current?.focus({ preventScroll: true })
  }, [isFixed])
  return (
    <>
      <p class="note">Tracker</p>
      <div class="pick" role="group" aria-label="Tracker">
        {trackers.map((name) => (
          <button type="button" aria-pressed={name === tracker} disabled={isFixed} onClick={() => onTracker(name)}>
            {shortName(name, trackers)}
          </button>
        ))}
      </div>
      <div class="four">
        {SIDES.map(({ side, fields }) => (
          <>
            <p class="w">
              {side}
              <span class="q">
                <Power typed={typed} fields={fields} />
              </span>
            </p>
            {fields.map((field) => (
              <FigureField
                field={field}
                side={side}
                text={typed[field]}
                isWrong={figure(typed[field], unitOf(field)) === null && (isTried || typed[field] !== '')}
                isFixed={isFixed}
                inputRef={field === 'inputV' ? first : undefined}
                onType={(text) => onType({ [field]: text })}
              />
            ))}
          </>
        ))}
      </div>
    </>
  )
}

function Power({ typed, fields: [v, a] }: { typed: Typed; fields: readonly [ReadingField, ReadingField] }) {
  const volts = figure(typed[v], 'V')
  const amps = figure(typed[a], 'A')
  return volts === null || amps === null ? null : <Wh text={grouped(volts * amps)} unit="W" />
}

interface FigureProps {
  field: ReadingField
  side: string
  text: string
  isWrong: boolean
  isFixed: boolean
  inputRef: Ref<HTMLInputElement> | undefined
  onType: (text: string) => void
}

function FigureField({ field, side, text, isWrong, isFixed, inputRef, onType }: FigureProps) {
  const unit = unitOf(field)
  const word = unit === 'V' ? 'Volts' : 'Amps'
  return (
    <div>
      <label for={field}>
        {word}
        <span class="sr"> {side.toLowerCase()}</span>
      </label>
      <div class="in">
        <input
          id={field}
          ref={inputRef}
          inputMode="decimal"
          autocomplete="off"
          enterkeyhint={field === 'outputA' ? 'send' : 'next'}
          value={text}
          readOnly={isFixed}
          aria-invalid={isWrong}
          aria-describedby={isWrong ? `${field}-wrong` : undefined}
          onInput={(event) => onType(event.currentTarget.value)}
          onKeyDown={(event) => toNext(event)}
        />
        <span class="u">{unit}</span>
      </div>
      {isWrong && (
        <p class="note wrong" id={`${field}-wrong`}>
          {unit === 'V' ? 'Above 0, to 1000' : 'Above 0, to 200'}
        </p>
      )}
    </div>
  )
}

/** Enter goes on to the next figure; at the last one it sends. */
function toNext(event: KeyboardEvent & { currentTarget: HTMLInputElement }): void {
  if (event.key !== 'Enter') return
  const inputs = [...(event.currentTarget.form?.querySelectorAll<HTMLInputElement>('.four input') ?? [])]
  const next = inputs[inputs.indexOf(event.currentTarget) + 1]
  if (next === undefined) return
  event.preventDefault()
  next.focus()
}

/** Nose, where every tracker of the car is called “… tracker”. */
const shortName = (name: string, all: string[]): string =>
  all.every((one) => / tracker$/i.test(one)) ? name.replace(/ tracker$/i, '') : name
