/** A wrong argument at one of the engine's doors: which field, what it was and what was expected. */
export class InputError extends Error {
  readonly code: string
  readonly field: string
  readonly detail: string

  /**
   * @param code    short stable name of what is wrong, for example 'out-of-range'
   * @param field   path of the argument, in the words of the caller's document
   * @param detail  one plain sentence with the value and what was expected
   */
  constructor(code: string, field: string, detail: string) {
    super(`${field}: ${detail}`)
    this.name = 'InputError'
    this.code = code
    this.field = field
    this.detail = detail
  }
}
