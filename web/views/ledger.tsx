import type { DayBudget } from '../../server/documents/budget.ts'
import { LedgerBar } from '../charts/bar.tsx'
import { grouped, kmText, round10, THIN } from '../format.ts'
import { type PrintedLedger, type PrintedLine, printedLedger } from '../ledger-lines.ts'
import { stageId } from '../shown.ts'
import { Cell } from './figures.tsx'
import { Tabs } from './tabs.tsx'

type Stage = DayBudget['stages'][number]

/** The account of the day or of one stage: every line to 10 Wh, and the printed lines add up. */
export function Ledger({ day, stage }: { day: DayBudget; stage: Stage | undefined }) {
  const ledger = printedLedger((stage ?? day).ledger)
  const lines = [...ledger.income, ...ledger.spendings]
  const mostWh = Math.max(100, ...lines.map((line) => Math.abs(line.shownWh)))
  const what = stage === undefined ? 'the day' : stage.name
  return (
    <section class="sec pad" aria-labelledby="ledger-title">
      <div class="sech">
        <h2 id="ledger-title">Ledger</h2>
        <span class="note">{stage === undefined ? 'whole day' : `${kmText(stage.drivenKm)}${THIN}km of today`}</span>
      </div>
      <StageTabs day={day} />
      <p class="note lead">To 10{THIN}Wh; the printed lines add up. Single forecasts, without a range.</p>
      <table class="led" id="ledger">
        <caption class="sr">Energy ledger of {what}, watt hours</caption>
        <thead>
          <tr>
            <th scope="col">Line</th>
            <th scope="col">Wh</th>
          </tr>
        </thead>
        <tbody>
          <Total kind="open" label="Opened with" of={ledger.opening} />
          <Lines lines={ledger.income} side="in" mostWh={mostWh} />
          <Total kind="tot" label="Came in" of={ledger.cameIn} />
          {ledger.short.shownWh > 0 && <Total kind="open short" label="Asked of an empty battery" of={ledger.short} />}
          <Lines lines={ledger.spendings} side="out" mostWh={mostWh} />
          <Total kind="tot" label="Went out" of={ledger.wentOut} />
          <Total kind="close" label="Balance" of={ledger.closing} />
          <ReserveRow day={day} />
        </tbody>
      </table>
      <Denied ledger={ledger} />
    </section>
  )
}

function StageTabs({ day }: { day: DayBudget }) {
  const stages = day.stages.map((stage) => ({ id: stage.id, text: stage.name }))
  if (stages.length < 2) return null
  return (
    <Tabs
      label="Ledger of"
      chosen={stageId.value ?? ''}
      items={[{ id: '', text: 'Whole day' }, ...stages]}
      onChoose={(id) => (stageId.value = id === '' ? null : id)}
    />
  )
}

interface TotalProps {
  kind: string
  label: string
  of: PrintedLedger['opening']
}

const Total = ({ kind, label, of }: TotalProps) => (
  <tr class={kind}>
    <th scope="row">{label}</th>
    <td>
      <Cell of={of} />
    </td>
  </tr>
)

interface LinesProps {
  lines: PrintedLine[]
  side: 'in' | 'out'
  mostWh: number
}

const Lines = ({ lines, side, mostWh }: LinesProps) =>
  lines.map((line) => (
    <>
      <tr class="row" data-line={line.id}>
        <th scope="row">{line.label}</th>
        <td>
          <b>
            <Cell of={line} />
          </b>
        </td>
      </tr>
      <tr class="bar">
        <td colSpan={2}>
          <LedgerBar side={side} wh={line.shownWh} mostWh={mostWh} />
        </td>
      </tr>
      {line.parts !== undefined && <Parts parts={line.parts} />}
    </>
  ))

const Parts = ({ parts }: { parts: PrintedLine[] }) => (
  <tr class="parts">
    <td colSpan={2} class="note">
      {parts.map((part, i) => (
        <>
          {i > 0 && ', '}
          {part.label} <Cell of={part} />
        </>
      ))}
      {THIN}Wh
    </td>
  </tr>
)

function ReserveRow({ day }: { day: DayBudget }) {
  return (
    <tr class="floor">
      <th scope="row">
        Reserve{' '}
        <span class="rg">
          {grouped(day.reserve.chargePct)}
          {THIN}% of charge, {grouped(day.reserve.energyPct)}
          {THIN}% of energy; full is {grouped(round10(day.capacityWh))}
          {THIN}Wh
        </span>
      </th>
      <td>
        <Cell of={{ wh: day.reserve.wh, shownWh: round10(day.reserve.wh) }} />
      </td>
    </tr>
  )
}

/** Sun that never came in: beside the balance, in no sum. */
function Denied({ ledger }: { ledger: PrintedLedger }) {
  const lines = ledger.denied.filter((line) => line.shownWh > 0)
  if (lines.length === 0) return <p class="note denied">No sun was denied by a window or by the battery.</p>
  return (
    <table class="led denied">
      <caption>Sun denied, in no sum</caption>
      <tbody>
        {lines.map((line) => (
          <tr class="row" data-line={line.id}>
            <th scope="row">{line.label}</th>
            <td>
              <Cell of={line} />
              <span class="u">{THIN}Wh</span>
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
