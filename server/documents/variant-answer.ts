import { energyCauses } from './energy-causes.ts'
import type { ArrivalCause, VariantAnswer, VariantDocument } from './variant.ts'
import type { planVariant, VariantBase, VariantPlan } from './variant-plan.ts'
import { variantSteps } from './variant-steps.ts'

const MIN_MS = 60_000

/** Half of nothing: differences of whole km/h under it are not worth a line. [min] */
const NOTHING_MIN = 1e-9

/**
 * A variant beside its base.
 *
 * @param last    the whole variant as it was planned
 * @param before  its steps but the last, each planned, in order
 */
export function variantAnswerOf(
  variant: VariantDocument,
  base: VariantBase,
  last: ReturnType<typeof planVariant>,
  before: VariantPlan[],
): VariantAnswer {
  const { outcome, driven, assumptions, atBaseSpeeds } = last
  const beside = driven === null || base.driven === null ? null : { driven, base: base.driven }
  return {
    name: variant.name,
    outcome,
    assumptions,
    figures: driven?.figures ?? null,
    laterMin: beside === null ? null : (beside.driven.peopleMs - beside.base.peopleMs) / MIN_MS,
    arrivalCauses: arrivalCauses(variant, base, [...before, last]),
    energyCauses: beside === null ? null : energyCauses(beside.driven.lines, beside.base.lines),
    atBaseSpeeds,
  }
}

/**
 * How much later each change makes the arrival, those before it made already: their sum is the whole difference.
 *
 * Planned steps are compared by their best speeds; what whole km/h cost more or less than the base's is a line of its
 * own. With speeds of its own every step is compared by those. Null where some step cannot be driven.
 */
function arrivalCauses(variant: VariantDocument, base: VariantBase, plans: VariantPlan[]): ArrivalCause[] | null {
  const steps = variantSteps(variant)
  if (base.driven === null) return null
  const isPlanned = variant.speeds === undefined
  let fromMs = isPlanned ? base.driven.bestMs : base.driven.peopleMs
  const causes: ArrivalCause[] = []
  for (const [i, { id, label }] of steps.entries()) {
    const { driven } = plans[i]
    if (driven === null) return null
    causes.push({ id, label, min: (driven.bestMs - fromMs) / MIN_MS })
    fromMs = driven.bestMs
  }
  const last = plans[plans.length - 1].driven
  if (last === null || !isPlanned) return last === null ? null : causes
  const roundedMin = (last.peopleMs - last.bestMs - (base.driven.peopleMs - base.driven.bestMs)) / MIN_MS
  if (Math.abs(roundedMin) < NOTHING_MIN) return causes
  return [...causes, { id: 'whole-speeds', label: 'Whole km/h in sections', min: roundedMin }]
}
