import type { VariantChange, VariantDocument } from './variant.ts'

/** One thing that a variant changes, and the variant with it and all before it. */
export interface VariantStep {
  id: string
  label: string
  variant: VariantDocument
}

const signed = (value: number): string => (value < 0 ? `−${-value}` : `+${value}`)

/** What each number of a change is called, and the value that changes nothing; in the order in which they are made. */
const CHANGES: {
  [K in keyof VariantChange]-?: { none?: number; text: (value: NonNullable<VariantChange[K]>) => string }
} = {
  sunPct: { none: 100, text: (pct) => `Sun ${pct} %` },
  headwindMps: { none: 0, text: (mps) => `Headwind ${signed(mps)} m/s` },
  massKg: { none: 0, text: (kg) => `Mass ${signed(kg)} kg` },
  dragAreaPct: { none: 100, text: (pct) => `Drag area ${pct} %` },
  rollingPct: { none: 100, text: (pct) => `Rolling ${pct} %` },
  trackerLossPct: { none: 100, text: (pct) => `Tracker losses ${pct} %` },
  trackerOff: { text: (name) => `Tracker ${name} off` },
  openingPct: { none: 0, text: (pct) => `Charge at the start ${signed(pct)} %` },
  stopMinutes: { none: 0, text: (min) => `Stops ${signed(min)} min` },
  reservePct: { text: (pct) => `Reserve ${pct} %` },
  targetPct: { text: (pct) => `Charge at the close ${pct} %` },
  closePct: { none: 0, text: (pct) => `Charge at the close ${signed(pct)} %` },
  byTime: { text: (time) => `Driving ends ${time}` },
}

const PATCHED = { car: 'Car', race: 'Race', sky: 'Sky' } as const

/**
 * The things that a variant changes, one after the other: its speeds, then car, race and sky, then the numbers. The
 * last step is the whole variant; there is none where nothing is changed.
 */
export function variantSteps({ name, speeds, change = {}, ...patches }: VariantDocument): VariantStep[] {
  const steps: VariantStep[] = []
  let variant: VariantDocument = { name }
  const add = (id: string, label: string, more: Omit<VariantDocument, 'name'>): void => {
    variant = { ...variant, ...more }
    steps.push({ id, label, variant })
  }
  if (speeds !== undefined) add('speeds', 'Speeds', { speeds })
  for (const of of ['car', 'race', 'sky'] as const)
    if (Object.keys(patches[of] ?? {}).length > 0) add(of, PATCHED[of], { [of]: patches[of] })
  for (const [id, { none, text }] of Object.entries(CHANGES) as [keyof VariantChange, Wording][]) {
    const value = change[id]
    if (value === undefined || value === none) continue
    add(id, text(value), { change: { ...variant.change, [id]: value } })
  }
  return steps
}

interface Wording {
  none?: number
  text: (value: string | number) => string
}
