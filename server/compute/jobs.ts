import { coastDownJob, readCoastDown } from './coast-jobs.ts'
import { type BodyInput, readDocument } from './file-jobs.ts'
import { forecastJson, inputsHash, pointingJson, readForecastRequest, trackerDaysJob } from './forecast-jobs.ts'
import { keptPlan, planHash, planJson, readPlanRequest } from './plan-jobs.ts'
import type { ComputePool } from './pool.ts'
import { keptRacePlan, racePlanJson, readRacePlanRequest } from './race-plan-jobs.ts'
import { judgeJob, learnJob, readReadings, reportJob } from './reading-jobs.ts'
import { compareJson, readComparison } from './sky-jobs.ts'
import { checkVariants, readVariants, variantBaseJob, variantJob } from './variant-jobs.ts'
import { readWhatIf, whatIfJson } from './what-if-jobs.ts'

/** Everything that is too heavy for the event loop, by name. */
export const JOBS = {
  'read-document': (input: BodyInput) => readDocument(input),
  'read-forecast-request': readForecastRequest,
  'inputs-hash': inputsHash,
  forecast: forecastJson,
  'read-plan-request': readPlanRequest,
  'plan-hash': planHash,
  plan: planJson,
  'kept-plan': keptPlan,
  'read-race-plan-request': readRacePlanRequest,
  'race-plan': racePlanJson,
  'kept-race-plan': keptRacePlan,
  'read-what-if': readWhatIf,
  'what-if': whatIfJson,
  'read-variants': readVariants,
  'check-variants': checkVariants,
  'variant-base': variantBaseJob,
  variant: variantJob,
  point: pointingJson,
  'read-coast-down': readCoastDown,
  'coast-down': coastDownJob,
  'read-readings': readReadings,
  'judge-readings': judgeJob,
  learn: learnJob,
  'read-sky-comparison': readComparison,
  'compare-skies': compareJson,
  'report-trackers': reportJob,
  'report-tracker-days': trackerDaysJob,
}

export type Compute = ComputePool<typeof JOBS>
