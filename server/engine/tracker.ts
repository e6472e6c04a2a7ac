import { InputError } from './input-error.ts'
import type { LossTable } from './loss-table.ts'

/** The voltages, currents and power in which a tracker works. */
export interface TrackerWindow {
  inputMinV: number
  inputMaxV: number
  inputMaxA: number
  outputMinV: number
  outputMaxV: number
  outputMaxA: number
  /** Most power at the input. */
  maxW: number
  /** How far the output must lie above the input, since the switch cannot rest; 0 where left out. */
  leastRiseV?: number
}

/** Four physical losses, none negative. */
export interface TrackerLosses {
  /** Gate drive, core and controller. */
  standingW: number
  /** Times input current times output voltage: switching. */
  switchingFraction: number
  /** Times input current squared: coil and switch. */
  conductionOhm: number
  /** Times output current: rectifier. */
  rectifierV: number
}

/** How heat takes power from a tracker: all of it up to one case temperature, falling evenly to a share at another. */
export interface Derating {
  fullToC: number
  /** Above `fullToC`; from here on the share stays. */
  leastFromC: number
  /** Share of `window.maxW` that is left there, 0..1. */
  leastShare: number
  /** Case over air for each watt lost, standing. [K/W] */
  parkedCPerW: number
  /** The same with the airflow of the road. [K/W] */
  movingCPerW: number
}

/** A boost converter that holds a string at its best power. */
export interface Tracker {
  name: string
  window: TrackerWindow
  losses: TrackerLosses
  /** Share of the string's best power that the search for it reaches, above 0 up to 1. */
  trackingEfficiency: number
  /** What a bench showed beyond `losses`; none where left out. */
  table?: LossTable
  /** Heat takes nothing where left out. */
  derating?: Derating
  /** Drawn from the pack while it takes nothing from its string; 0 where left out. */
  standbyW?: number
  /** Broken or taken out of the circuit: takes and draws nothing. */
  isDead?: boolean
  /** Trackers that share one string; see sharedTracker. */
  channels?: Channels
}

/** Trackers side by side on one string: those that work take its current in even shares. */
export interface Channels {
  list: Tracker[]
  /** Share of the current through each that works, 0 where none does. */
  share: number
}

/** What keeps a tracker from the string's best power. Their order is how series count them. */
export const LIMITS = [
  'input-low',
  'input-high',
  'current',
  'power',
  'output-current',
  'cannot-step-down',
  'output-low',
  'output-high',
  'asleep',
  'derated',
  'dead',
] as const
export type TrackerLimit = (typeof LIMITS)[number]

function check(name: string, value: number, isGood: boolean, wanted: string): void {
  if (!isGood) throw new InputError('out-of-range', `tracker.${name}`, `${value} given, ${wanted} expected`)
}

const isFromZero = (value: number): boolean => value >= 0 && value < Infinity

/**
 * A tracker that the functions of output and operating point can rely on.
 *
 * @throws InputError naming the field when a number is missing or out of range
 */
export function prepareTracker(tracker: Tracker): Tracker {
  const { window, losses, trackingEfficiency, derating, standbyW = 0 } = tracker
  checkWindow(window)
  for (const name of ['standingW', 'switchingFraction', 'conductionOhm', 'rectifierV'] as const)
    check(`losses.${name}`, losses[name], isFromZero(losses[name]), 'a number of at least 0')
  const isShare = trackingEfficiency > 0 && trackingEfficiency <= 1
  check('trackingEfficiency', trackingEfficiency, isShare, 'above 0 up to 1')
  check('standbyW', standbyW, isFromZero(standbyW), 'a number of at least 0')
  if (derating !== undefined) checkDerating(derating)
  return { ...tracker, window: { ...window }, losses: { ...losses } }
}

function checkWindow(window: TrackerWindow): void {
  for (const name of ['inputMinV', 'outputMinV'] as const)
    check(`window.${name}`, window[name], isFromZero(window[name]), 'a number of at least 0')
  for (const name of ['inputMaxA', 'outputMaxA', 'maxW'] as const)
    check(`window.${name}`, window[name], window[name] > 0, 'a number above 0')
  check('window.inputMaxV', window.inputMaxV, window.inputMaxV > window.inputMinV, 'more than inputMinV')
  check('window.outputMaxV', window.outputMaxV, window.outputMaxV > window.outputMinV, 'more than outputMinV')
  const { leastRiseV = 0 } = window
  check('window.leastRiseV', leastRiseV, isFromZero(leastRiseV), 'a number of at least 0')
}

function checkDerating(derating: Derating): void {
  const { fullToC, leastFromC, leastShare } = derating
  check('derating.fullToC', fullToC, fullToC > -273.15 && fullToC < Infinity, 'a temperature')
  check('derating.leastFromC', leastFromC, leastFromC > fullToC && leastFromC < Infinity, 'more than fullToC')
  check('derating.leastShare', leastShare, leastShare >= 0 && leastShare <= 1, '0 to 1')
  for (const name of ['parkedCPerW', 'movingCPerW'] as const)
    check(`derating.${name}`, derating[name], isFromZero(derating[name]), 'a number of at least 0')
}

/** The trackers of a string, one by one. */
export const channelsOf = (tracker: Tracker): Tracker[] => tracker.channels?.list ?? [tracker]

/**
 * Several trackers on one string as one: the voltages that suit all that work, ceilings of current and power as many
 * times as there are shares. A dead one leaves its share to the others; with all dead, nothing is taken.
 *
 * @param list two or more, each from prepareTracker
 * @throws InputError when no voltage suits all of them
 */
export function sharedTracker(name: string, list: Tracker[]): Tracker {
  const working = list.filter((tracker) => tracker.isDead !== true)
  if (working.length === 0) return { ...list[0], name, isDead: true, channels: { list, share: 0 } }
  const n = working.length
  const least = (of: keyof TrackerWindow): number => Math.min(...working.map(({ window }) => window[of] ?? 0))
  const most = (of: keyof TrackerWindow): number => Math.max(...working.map(({ window }) => window[of] ?? 0))
  return prepareTracker({
    name,
    window: {
      inputMinV: most('inputMinV'),
      inputMaxV: least('inputMaxV'),
      outputMinV: most('outputMinV'),
      outputMaxV: least('outputMaxV'),
      inputMaxA: n * least('inputMaxA'),
      outputMaxA: n * least('outputMaxA'),
      maxW: n * least('maxW'),
      leastRiseV: most('leastRiseV'),
    },
    losses: working[0].losses,
    trackingEfficiency: working.reduce((sum, { trackingEfficiency }) => sum + trackingEfficiency / n, 0),
    channels: { list, share: 1 / n },
  })
}
