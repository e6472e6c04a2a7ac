/** A value of JSON that is handed on as the text it is kept as, without being read on the way. */
export class JsonText {
  readonly text: string

  constructor(text: string) {
    this.text = text
  }

  /** For whoever takes it for a value after all. */
  toJSON(): unknown {
    return JSON.parse(this.text)
  }
}
