import { z } from 'zod'
import { instant, quantity, slug } from './quantity.ts'

/** Where a car is in the middle of a day, with what charge. */
export const hereDocument = z
  .strictObject({
    at: instant('when; the day is worked out from then on'),
    stage: slug('id of the stage that the car is on, or at whose end it stands'),
    km: quantity(0, 50_000, 'from the start of the stage [km]'),
    chargePct: quantity(0, 100, 'charge then [% of charge]'),
    stopLeftMin: quantity(
      0,
      600,
      'what is left of the stop at the end of the stage, for a car that stands there; left out: all of it [min]',
    ).optional(),
    speedKmh: quantity(0, 200, 'how fast it is then [km/h]').default(0),
    packC: quantity(-40, 90, 'temperature of the pack then; left out: the air’s [°C]').optional(),
  })
  .meta({ title: 'Here' })

export type HereDocument = z.output<typeof hereDocument>

/** Where a car is parked for the day although its hours have not ended. */
export const campDocument = z
  .strictObject({
    stage: slug('id of the stage on which it is'),
    km: quantity(0, 50_000, 'from the start of the stage, more than 0 and not beyond its end [km]'),
  })
  .meta({ title: 'Camp' })

export type CampDocument = z.output<typeof campDocument>
