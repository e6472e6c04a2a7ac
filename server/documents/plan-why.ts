import { chargeAtStoredJ } from '../engine/battery.ts'
import { whyImpossible } from '../engine/planner/impossible.ts'
import { someTables } from '../engine/planner/plan-day.ts'
import type { DrivenDay } from './forecast.ts'
import { clock } from './local-time.ts'
import { edgeKm } from './plan-camp.ts'
import type { PlanDocument } from './plan.ts'

const WH = 1 / 3600

/** Where the road of a day ends, by its name. */
export const finishName = (day: DrivenDay): string =>
  day.race.stages[day.race.days[day.dayIndex].lastStage]?.finish ?? 'The end'

/** Why no speeds keep what is wanted, in words. */
export function whyNotPlanned(day: DrivenDay, targetCharge: number): Pick<PlanDocument, 'outcome' | 'impossible'> {
  const found = someTables({ race: day.race, dayIndex: day.dayIndex, opening: day.opening, targetCharge })
  if (found === null)
    return { outcome: { kind: 'parked', text: 'The car is not driven on this day.' }, impossible: null }
  const { tables, reach } = found
  const why = whyImpossible(tables)
  const { pack } = day.race.car
  const reachedKm = edgeKm(day, reach.first + why.farthestEdge)
  const mostPct = chargeAtStoredJ(pack, why.mostAtCloseJ) * 100
  // The tables may reach what the day itself just misses: then the next whole per cent below is asked for.
  const lessPct = Math.max(Math.ceil(targetCharge * 100 - 1e-6) - 1, 0)
  const floorPct = chargeAtStoredJ(pack, why.floorJ) * 100
  const laterMin = why.laterS / 60
  const nearest = [
    ...(Number.isNaN(why.mostAtCloseJ)
      ? []
      : [
          {
            what: 'target' as const,
            value: Math.min(mostPct, lessPct),
            text: `Close with ${Math.floor(Math.min(mostPct, lessPct))} % instead of ${Math.round(targetCharge * 100)} %.`,
          },
        ]),
    ...(Number.isNaN(why.floorJ)
      ? []
      : [{ what: 'reserve' as const, value: floorPct, text: `Lower the reserve to ${Math.floor(floorPct)} %.` }]),
    ...(Number.isNaN(why.laterS)
      ? []
      : [
          {
            what: 'later' as const,
            value: laterMin,
            text: `Drive ${Math.ceil(laterMin)} min longer, if the event allows it.`,
          },
        ]),
  ]
  return {
    outcome: { kind: 'impossible', text: sentence(day, why, { reachedKm, mostPct, targetCharge, tables }) },
    impossible: {
      why: why.why,
      reachedKm,
      mostAtCloseWh: Number.isNaN(why.mostAtCloseJ) ? null : why.mostAtCloseJ * WH,
      nearest,
    },
  }
}

function sentence(
  day: DrivenDay,
  why: ReturnType<typeof whyImpossible>,
  of: { reachedKm: number; mostPct: number; targetCharge: number; tables: { targetJ: number } },
): string {
  const name = finishName(day)
  if (why.why === 'target') {
    const shortWh = Math.round((of.tables.targetJ - why.mostAtCloseJ) * WH)
    if (shortWh < 1)
      return `${name} can be reached, but the day then closes just short of ${Math.round(of.targetCharge * 100)} %.`
    return `${name} can be reached, but the day then closes with ${Math.floor(of.mostPct)} % at most: ${shortWh} Wh short of ${Math.round(of.targetCharge * 100)} %.`
  }
  const endsAt = clock(day.race.days[day.dayIndex].drivingToMs, day.zone)
  if (why.why === 'reserve')
    return `${name} cannot be reached by ${endsAt} with the reserve untouched: the car comes to km ${of.reachedKm.toFixed(0)}.`
  return `${name} cannot be reached by ${endsAt}: the sun and the pack bring the car to km ${of.reachedKm.toFixed(0)}.`
}
