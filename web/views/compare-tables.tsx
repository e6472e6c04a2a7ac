import type { ComparedScore, SkyComparison } from '../../server/documents/sky-comparison.ts'
import { decimal, MEASURES, off, offText } from '../comparison-words.ts'
import { dayText, grouped, kmText, round10, signed, stampText, THIN } from '../format.ts'

type Place = SkyComparison['places'][number]

/** Every measure at a place: how far off, how large the error, over how many rows. */
export function Scores({ place }: { place: Place }) {
  return (
    <>
      <table class="led">
        <caption class="sr">How far the forecast was off at {place.name}</caption>
        <thead>
          <tr>
            <th scope="col">
              <span class="sr">Measure</span>
            </th>
            <th scope="col">off by</th>
            <th scope="col">error</th>
            <th scope="col">rms</th>
            <th scope="col">rows</th>
          </tr>
        </thead>
        <tbody>
          {place.scores.map((score) => (
            <ScoreRow key={score.id} score={score} />
          ))}
        </tbody>
      </table>
      <p class="note">
        {stampText(place.from)} to {stampText(place.to)}. Error: mean size. Nearest forecast: {place.nearest.name},{' '}
        {kmText(place.nearest.km)}
        {THIN}km.
      </p>
    </>
  )
}

function ScoreRow({ score }: { score: ComparedScore }) {
  const { text, unit, digits } = MEASURES[score.id]
  return (
    <tr class="row">
      <th scope="row">{unit === '' ? text : `${text}, ${unit}`}</th>
      <td>{off(score.bias, digits)}</td>
      <td>{decimal(score.meanAbsoluteError, digits)}</td>
      <td>{decimal(score.rms, digits)}</td>
      <td>{grouped(score.rows)}</td>
    </tr>
  )
}

/** Sun of each day, forecast and measured. */
export const DayEnergies = ({ place }: { place: Place }) => (
  <table class="led">
    <caption class="sr">Energy of each day at {place.name}</caption>
    <thead>
      <tr>
        <th scope="col">Wh/m²</th>
        <th scope="col">forecast</th>
        <th scope="col">measured</th>
        <th scope="col">ratio</th>
      </tr>
    </thead>
    <tbody>
      {place.days.filter(isLit).map((day) => (
        <tr class="row" key={day.date}>
          <th scope="row">{dayText(day.date)}</th>
          <td>{grouped(round10(day.forecastWhm2))}</td>
          <td>{grouped(round10(day.measuredWhm2))}</td>
          <td>{day.ratio === null ? '–' : decimal(day.ratio, 2)}</td>
        </tr>
      ))}
    </tbody>
  </table>
)

/** A span that starts at night leaves a day without sun, of which there is nothing to say. */
const isLit = ({ forecastWhm2, measuredWhm2 }: Place['days'][number]): boolean =>
  round10(forecastWhm2) > 0 || round10(measuredWhm2) > 0

interface ByTimeProps {
  title: string
  rows: { text: string; scores: ComparedScore[] }[]
}

/** How far off by some span of time; nothing where there is none. */
export function ByTime({ title, rows }: ByTimeProps) {
  if (rows.length === 0) return null
  return (
    <details class="more">
      <summary>{title}</summary>
      <table class="led">
        <caption class="sr">{title}: how far the forecast was off</caption>
        <thead>
          <tr>
            <th scope="col">
              <span class="sr">Time</span>
            </th>
            <th scope="col">W/m²</th>
            <th scope="col">index</th>
            <th scope="col">°C</th>
            <th scope="col">m/s</th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ text, scores }) => (
            <tr class="row" key={text}>
              <th scope="row">{text}</th>
              <td>{offText(scores, 'ghiWm2')}</td>
              <td>{offText(scores, 'clearSkyIndex')}</td>
              <td>{offText(scores, 'airTempC')}</td>
              <td>{offText(scores, 'windMps')}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </details>
  )
}

/** The day's ledger under both skies. */
export const WorthTable = ({ worth }: { worth: NonNullable<SkyComparison['worth']> }) => (
  <>
    <table class="led">
      <caption class="sr">The ledger under both skies</caption>
      <thead>
        <tr>
          <th scope="col">Wh</th>
          <th scope="col">forecast</th>
          <th scope="col">measured</th>
          <th scope="col">off by</th>
        </tr>
      </thead>
      <tbody>
        {worth.lines.map((line) => (
          <tr class="row" key={`${line.side} ${line.id}`}>
            <th scope="row">
              {line.label}
              {line.side === 'denied' && ', denied'}
            </th>
            <td data-wh={line.forecastWh}>{grouped(round10(line.forecastWh))}</td>
            <td data-wh={line.measuredWh}>{grouped(round10(line.measuredWh))}</td>
            <td data-wh={line.differenceWh}>{signed(round10(line.differenceWh))}</td>
          </tr>
        ))}
        <tr class="tot">
          <th scope="row">Close</th>
          <td data-wh={worth.forecast.closingWh}>{grouped(round10(worth.forecast.closingWh))}</td>
          <td data-wh={worth.measured.closingWh}>{grouped(round10(worth.measured.closingWh))}</td>
          <td data-wh={worth.closingWh}>{signed(round10(worth.closingWh))}</td>
        </tr>
      </tbody>
    </table>
    <p class="note">
      {worth.car}, both opened with {grouped(worth.openingPct)}
      {THIN}%{worth.heldKmh !== null && ` and driven at ${grouped(worth.heldKmh)}${THIN}km/h`}. What was denied stands
      in no sum.
    </p>
  </>
)
