import { z } from 'zod'
import { cellType, panel, stand, string } from './car-array.ts'
import { auxiliaries, body } from './car-body.ts'
import { drive } from './car-drive.ts'
import { pack } from './car-pack.ts'
import { meter, tracker } from './car-tracker.ts'
import { label } from './quantity.ts'

/** The car: body, panels, strings, trackers, drive, pack. */
export const carDocument = z
  .strictObject({
    name: label('name of the car'),
    body,
    drive,
    auxiliaries,
    panels: z.array(panel).min(1).max(60),
    stand,
    cellTypes: z.record(label('name of a cell type'), cellType),
    strings: z.array(string).min(1).max(60),
    trackers: z.array(tracker).min(1).max(60),
    meters: z.array(meter).max(60).optional().describe('meters that trackers are read with'),
    pack,
  })
  .superRefine((car, context) => {
    const issue = (path: (string | number)[], message: string, input: unknown) =>
      context.addIssue({ code: 'custom', path, message, input })
    const panels = car.panels.map((p) => p.name)
    const trackers = car.trackers.map((t) => t.name)
    const oneOf = (names: string[]) => `one of ${names.map((name) => JSON.stringify(name)).join(', ')}`
    repeated(panels).forEach((i) => issue(['panels', i, 'name'], 'a name used once', panels[i]))
    repeated(trackers).forEach((i) => issue(['trackers', i, 'name'], 'a name used once', trackers[i]))
    const meters = (car.meters ?? []).map((m) => m.name)
    repeated(meters).forEach((i) => issue(['meters', i, 'name'], 'a name used once', meters[i]))
    const names = car.strings.map((s) => s.name)
    repeated(names).forEach((i) => issue(['strings', i, 'name'], 'a name used once', names[i]))
    const held = car.strings.map((s) => s.tracker)
    repeated(held).forEach((i) => issue(['strings', i, 'tracker'], 'a tracker that holds no other string', held[i]))
    car.strings.forEach((s, i) => {
      if (!trackers.includes(s.tracker)) issue(['strings', i, 'tracker'], oneOf(trackers), s.tracker)
      if (!Object.hasOwn(car.cellTypes, s.cellType))
        issue(['strings', i, 'cellType'], oneOf(Object.keys(car.cellTypes)), s.cellType)
      s.cells.forEach((c, j) => {
        if (!panels.includes(c.panel)) issue(['strings', i, 'cells', j, 'panel'], oneOf(panels), c.panel)
      })
    })
    if (car.stand !== undefined && car.stand.tiltMaxDeg < car.stand.tiltMinDeg)
      issue(['stand', 'tiltMaxDeg'], `at least tiltMinDeg (${car.stand.tiltMinDeg})`, car.stand.tiltMaxDeg)
  })
  .meta({ title: 'Car' })

const repeated = (names: string[]): number[] => names.flatMap((name, i) => (names.indexOf(name) < i ? [i] : []))

export type CarDocument = z.output<typeof carDocument>
export type CarInput = z.input<typeof carDocument>
