import { z } from 'zod'
import { cellType, panel, stand } from './car-array.ts'
import { auxiliaries, body } from './car-body.ts'
import { drive } from './car-drive.ts'
import { pack } from './car-pack.ts'
import { string } from './car-string.ts'
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
    const held = car.strings.flatMap((s, i) => [
      { path: ['strings', i, 'tracker'], name: s.tracker },
      ...s.alsoTrackers.map((name, j) => ({ path: ['strings', i, 'alsoTrackers', j], name })),
    ])
    repeated(held.map(({ name }) => name)).forEach((i) =>
      issue(held[i].path, 'a tracker that holds no other string', held[i].name),
    )
    held.forEach(({ path, name }) => {
      if (!trackers.includes(name)) issue(path, oneOf(trackers), name)
    })
    car.strings.forEach((s, i) => {
      const windows = [s.tracker, ...s.alsoTrackers].flatMap((name) => car.trackers.filter((t) => t.name === name))
      if (!haveCommonVolts(windows.map(({ window }) => window)))
        issue(['strings', i, 'alsoTrackers'], 'trackers with input and output voltages in common', s.alsoTrackers)
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

type Window = z.output<typeof tracker>['window']

/** Whether trackers side by side find a voltage at both sides that suits them all. */
function haveCommonVolts(windows: Window[]): boolean {
  const least = (of: (window: Window) => number): number => Math.min(...windows.map(of))
  const most = (of: (window: Window) => number): number => Math.max(...windows.map(of))
  return (
    windows.length < 2 ||
    (most((w) => w.inputMinV) < least((w) => w.inputMaxV) && most((w) => w.outputMinV) < least((w) => w.outputMaxV))
  )
}

const repeated = (names: string[]): number[] => names.flatMap((name, i) => (names.indexOf(name) < i ? [i] : []))

export type CarDocument = z.output<typeof carDocument>
export type CarInput = z.input<typeof carDocument>
