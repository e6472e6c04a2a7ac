import type { ComponentChildren } from 'preact'
import { CurveChart, curveText } from '../charts/curve.tsx'
import type { Mark } from '../charts/curve-paths.ts'
import { trackers } from '../crew-state.ts'
import type { ReadingAnswer, ReadingDocument, TrackerReport, Verdict } from '../crew-types.ts'
import { dayText, THIN } from '../format.ts'
import {
  curveAt,
  curveInUse,
  type Figures,
  type Glance,
  glanceAt,
  type Meter,
  type Meters,
  movedText,
  pct1,
  type Shown,
  shownBy,
} from '../log-reading.ts'

interface SightProps {
  figures: Figures
  chosen: Meters
  meters: Meter[]
  report: TrackerReport | undefined
}

const uses = () => trackers.value?.uses ?? 'learned'

/** First sight while the figures are typed: efficiency, where it lies, the curve. */
export function ReadingSight({ figures, chosen, meters, report }: SightProps) {
  const shown = shownBy(figures, chosen, meters)
  const at = report === undefined ? null : curveAt(report.inputW, curveInUse(report, uses()), shown.inputW)
  const glance = glanceAt(shown, at)
  const says = at === null ? '' : ` Curve says ${pct1(at.efficiencyPct)}${THIN}%, band ${band(at.lowPct, at.highPct)}.`
  return (
    <>
      <Efficiency pct={shown.efficiencyPct} u={shown.uncertaintyPct} />
      <Hint sign={glance.kind} title={titleOf(glance)}>
        {textOf(glance) + says}
      </Hint>
      {report !== undefined && <Where report={report} mark={markOf(shown, glance.kind !== 'impossible')} />}
    </>
  )
}

const band = (low: number, high: number): string => `${pct1(low)}–${pct1(high)}${THIN}%`

const markOf = (shown: Pick<Shown, 'inputW' | 'efficiencyPct' | 'uncertaintyPct'>, counts: boolean): Mark => ({
  ...shown,
  counts,
  text: 'this reading',
})

function titleOf(glance: Glance): string {
  switch (glance.kind) {
    case 'impossible':
      return 'Not possible: more out than in'
    case 'fits':
      return 'Fits the curve'
    case 'alone':
      return 'No curve at this power'
    default:
      return `${glance.kind === 'under' ? 'Under' : 'Over'} the curve by ${pct1(glance.points)} points`
  }
}

const TEXTS: Record<Glance['kind'], string> = {
  impossible: 'Check the amps out, and that all clamps sit on this tracker.',
  fits: 'The meters cannot tell the two apart.',
  alone: 'It is sent as it stands.',
  under: 'More than the meters explain.',
  over: 'More than the meters explain.',
}

const textOf = ({ kind }: Glance): string => TEXTS[kind]

const Efficiency = ({ pct, u }: { pct: number; u: number }) => (
  <div class="eff">
    <p class="e">
      {pct1(pct)}
      <span class="u">{THIN}%</span>
    </p>
    <p class="note">
      efficiency{u > 0 && `, ${pct1(pct - 2 * u)}–${pct1(pct + 2 * u)}`}
      {u > 0 && (
        <>
          <br />
          in 95 of 100 with these meters
        </>
      )}
    </p>
  </div>
)

const SIGNS: Record<string, string> = {
  impossible: 'M4 4l14 14M18 4L4 18',
  under: 'M2 4h18L11 20z',
  over: 'M2 19h18L11 3z',
  fits: 'M3 11h16',
  alone: 'M3 11h16',
}

interface HintProps {
  sign: Glance['kind']
  title: string
  children: ComponentChildren
}

const Hint = ({ sign, title, children }: HintProps) => (
  <div class={sign === 'impossible' ? 'hint act' : 'hint'}>
    <svg width="22" height="22" viewBox="0 0 22 22" aria-hidden="true">
      <path d={SIGNS[sign]} fill="none" stroke="currentColor" stroke-width={sign === 'fits' ? 6 : 2.2} />
    </svg>
    <div>
      <b>{title}</b>
      <p class="note">{children}</p>
    </div>
  </div>
)

function Where({ report, mark }: { report: TrackerReport; mark: Mark }) {
  return (
    <CurveChart
      label={curveText(report.name, [mark])}
      inputW={report.inputW}
      maxW={report.maxW}
      curve={curveInUse(report, uses())}
      marks={[mark]}
    />
  )
}

const TITLES: Record<Verdict, string> = {
  counts: 'Taken: it counts',
  impossible: 'Kept, left out: more out than in',
  'at-limit': 'Kept, not learned from: at a limit',
  'pack-full': 'Kept, not learned from: battery full',
  'far-off': 'Swap the clamps and read again',
}

interface VerdictProps {
  reading: ReadingDocument
  answer: ReadingAnswer
  report: TrackerReport | undefined
}

/** What the service made of the reading, and what that moved. */
export function ReadingVerdict({ reading, answer, report }: VerdictProps) {
  const isBelow = answer.efficiencyPct < answer.expectedPct
  const sign =
    answer.verdict === 'impossible'
      ? 'impossible'
      : answer.verdict === 'far-off'
        ? isBelow
          ? 'under'
          : 'over'
        : 'fits'
  const mark = markOf({ ...answer, inputW: reading.inputV * reading.inputA }, answer.counts)
  return (
    <div data-verdict={answer.verdict}>
      <Efficiency pct={answer.efficiencyPct} u={answer.uncertaintyPct} />
      <Hint sign={sign} title={TITLES[answer.verdict]}>
        {sentence(answer.reason)} Curve said {pct1(answer.expectedPct)}
        {THIN}%, band {band(answer.bandPct[0], answer.bandPct[1])}.
      </Hint>
      <ul class="moved">
        {answer.moved.map((moved) => (
          <li data-moved-wh={moved.movedWh} data-closing-wh={moved.closingWhAfter}>
            <b>{dayText(moved.date)}.</b> {movedText(moved)}
          </li>
        ))}
      </ul>
      {answer.counts && answer.moved.length === 0 && (
        <p class="note gap">No day is followed yet, so no budget moved. Day has “Follow this”.</p>
      )}
      {report !== undefined && <Where report={report} mark={mark} />}
    </div>
  )
}

/** A reason as a sentence of its own. */
const sentence = (text: string): string => `${text.charAt(0).toUpperCase()}${text.slice(1).replace(/\.$/, '')}.`
