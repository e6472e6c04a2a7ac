import type { CoastDownDocument } from '../../server/documents/coast-down-result.ts'
import type { Notice } from '../api.ts'
import { ResidualChart } from '../charts/residuals.tsx'
import {
  biasWords,
  coastSentence,
  fixed,
  gradeWords,
  linearWords,
  loadWords,
  runWords,
  windWords,
} from '../coast-words.ts'
import { grouped, THIN } from '../format.ts'
import { Say, Wh } from './figures.tsx'
import { Notices } from './problems.tsx'

/** Runs whose pictures are shown at once. */
const SHOWN_RUNS = 6

/** What a coast-down tells: its sentence, what it leaves, the figures in reference air, what should be known. */
export function CoastResult({ result, notices }: { result: CoastDownDocument; notices: Notice[] }) {
  const { warnings } = result
  return (
    <div data-coast-result>
      <h2 class="say">
        <Say phrase={coastSentence(result)} />
      </h2>
      <p class="note">± holds 95 of 100. Take both from one test, never one of them alone.</p>
      {warnings.length > 0 && (
        <ul class="plain gap" data-warnings>
          {warnings.map((warning) => (
            <li>{warning}</li>
          ))}
        </ul>
      )}
      <Notices items={notices} />
      <Day result={result} />
      <Residuals result={result} />
      <Reference result={result} />
    </div>
  )
}

/** Wind and slope of the day, and the scatter of a row. */
function Day({ result }: { result: CoastDownDocument }) {
  const [wind, grade] = [windWords(result), gradeWords(result)]
  const notes = [biasWords(result), linearWords(result)].filter((note) => note !== null)
  return (
    <>
      <dl class="found">
        <Row label="Wind along" note={wind.note} text={wind.text} unit="m/s" />
        <Row label="Slope" note={grade.note} text={grade.text} unit="%" />
        <Row label="Scatter" note="of one row about the fit" text={fixed(result.noise.kmh, 2)} unit="km/h" />
      </dl>
      {notes.map((note) => (
        <p class="note gap">{note}</p>
      ))}
    </>
  )
}

const Row = ({ label, note, text, unit }: { label: string; note: string; text: string; unit: string }) => (
  <div>
    <dt>{label}</dt>
    <dd>
      <Wh text={text} unit={unit} />
    </dd>
    <dd class="note">{note}</dd>
  </div>
)

function Residuals({ result: { runs, noise } }: { result: CoastDownDocument }) {
  const lastS = Math.max(...runs.map(({ timeS }) => timeS[timeS.length - 1]))
  const mostKmh = Math.max(...runs.flatMap(({ residualKmh }) => residualKmh.map(Math.abs)))
  const lane = (run: CoastDownDocument['runs'][number]) => (
    <figure class="lane">
      <figcaption class="note">
        <b>{run.name}</b>: {runWords(run)}
      </figcaption>
      <ResidualChart
        label={`${run.name}: speed as logged less as fitted, over the time of the run`}
        run={run}
        lastS={lastS}
        mostKmh={mostKmh}
        sdKmh={noise.kmh}
      />
    </figure>
  )
  const rest = runs.slice(SHOWN_RUNS)
  return (
    <section class="sec" aria-labelledby="coast-left">
      <div class="sech">
        <h2 id="coast-left">What the fit leaves</h2>
        <span class="note">logged less fitted, km/h</span>
      </div>
      {runs.slice(0, SHOWN_RUNS).map(lane)}
      {rest.length > 0 && (
        <details class="more">
          <summary>{rest.length} more runs</summary>
          {rest.map(lane)}
        </details>
      )}
      <p class="note">
        Dots scatter evenly where the fit holds; a slow wave is wind, slope or a brake. Dashed: two standard deviations.
        Diamonds lie more than five off.
      </p>
    </section>
  )
}

function Reference({ result }: { result: CoastDownDocument }) {
  const { reference, densityKgM3 } = result
  return (
    <section class="sec" aria-labelledby="coast-reference">
      <div class="sech">
        <h2 id="coast-reference">In reference air</h2>
        <span class="note">
          20{THIN}°C, 982.1{THIN}hPa, calm, level
        </span>
      </div>
      <table class="holding">
        <thead>
          <tr>
            <th scope="col">Speed, km/h</th>
            <th scope="col">Force, N</th>
            <th scope="col">At the wheels, W</th>
          </tr>
        </thead>
        <tbody>
          {reference.holding.map(({ speedKmh, forceN, powerW }) => (
            <tr>
              <th scope="row">{grouped(speedKmh)}</th>
              <td>{fixed(forceN, 1)}</td>
              <td>{grouped(powerW)}</td>
            </tr>
          ))}
        </tbody>
      </table>
      <p class="note">
        Force = {loadWords(result)}, in N for v in km/h. Air at the test {fixed(densityKgM3, 3)}
        {THIN}kg/m³, reference {fixed(reference.densityKgM3, 3)}
        {THIN}kg/m³.
      </p>
    </section>
  )
}
