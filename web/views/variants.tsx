import { useEffect } from 'preact/hooks'
import { variantNews } from '../crew-state.ts'
import { opened } from '../plan-state.ts'
import type { PlanAnswer } from '../plan-types.ts'
import '../style/here.css'
import '../style/variants.css'
import { hearVariant, loadVariants, looked, prepareQuick, variantRefusal, variants } from '../variant-state.ts'
import { Conflict } from './conflict.tsx'
import { VariantCauses } from './variant-causes.tsx'
import { VariantSliders } from './variant-sliders.tsx'
import { VariantTable } from './variant-table.tsx'

/** What might be otherwise: quick answers, and variants in full beside the plan that is opened. */
export function Variants() {
  const entry = opened.value
  return entry === null || entry.plan === null ? null : <Beside entry={entry} />
}

function Beside({ entry }: { entry: PlanAnswer }) {
  useEffect(() => {
    void loadVariants(entry.id)
    void prepareQuick(entry)
  }, [entry.id])
  useEffect(hearVariant, [variantNews.value])
  const { plan, items } = variants.value
  const kept = plan === entry.id ? items : []
  const shown = kept.find(({ id }) => id === looked.value)
  return (
    <section class="sec pad variants what-if" aria-labelledby="variants-of-title" id="variants-of">
      <div class="sech">
        <h2 id="variants-of-title">What if</h2>
      </div>
      {kept.length > 0 && <VariantTable entry={entry} kept={kept} />}
      {shown !== undefined && <VariantCauses of={shown} />}
      {variantRefusal.value !== null && <Conflict refusal={variantRefusal.value} />}
      <VariantSliders entry={entry} />
    </section>
  )
}
