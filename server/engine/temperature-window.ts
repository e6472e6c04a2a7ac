import { InputError } from './input-error.ts'

/** Cell temperatures at which a current may flow: none outside min and max, all of it between the two full ones. [C] */
export interface TemperatureWindow {
  minC: number
  fullFromC: number
  fullToC: number
  maxC: number
}

/** @throws InputError when the four do not ascend */
export function checkWindow(name: string, { minC, fullFromC, fullToC, maxC }: TemperatureWindow): void {
  if (Number.isFinite(minC) && minC <= fullFromC && fullFromC <= fullToC && fullToC <= maxC && Number.isFinite(maxC))
    return
  const given = [minC, fullFromC, fullToC, maxC].join(', ')
  throw new InputError('out-of-range', name, `${given} given, minC ≤ fullFromC ≤ fullToC ≤ maxC expected`)
}

/**
 * Share of the current limit that a temperature allows, in straight lines between the four temperatures.
 *
 * @param tempC temperature of the cells. [C]
 * @returns 0..1
 */
export function shareAllowed({ minC, fullFromC, fullToC, maxC }: TemperatureWindow, tempC: number): number {
  if (tempC < minC || tempC > maxC) return 0
  if (tempC < fullFromC) return (tempC - minC) / (fullFromC - minC)
  return tempC > fullToC ? (maxC - tempC) / (maxC - fullToC) : 1
}
