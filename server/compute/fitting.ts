import { InputError } from '../engine/input-error.ts'
import { Fault } from '../errors.ts'

/** Documents that do not fit together are a fault of the request, not of the service. */
export function fitting<T>(work: () => T): T {
  try {
    return work()
  } catch (error) {
    if (!(error instanceof InputError)) throw error
    const { field, detail } = error
    throw new Fault('cannot-forecast', `${field}: ${detail}.`, { errors: [{ field, detail }] })
  }
}
