import { Duplex } from 'node:stream'
import { type Batch, batchCutter, errorFrame, READY } from './wire.ts'

/** How the socket reaches the engine. */
export interface EngineLine {
  send(batch: Batch): void
  leave(): void
}

/**
 * The client's end of a connection to the embedded engine.
 *
 * When the engine stops, what is unanswered is answered by an error and the socket closes at once, before
 * the client's callers hear of it: what they ask next goes to a new connection.
 */
export class BridgeSocket extends Duplex {
  /** Read by the client before it says goodbye. */
  readyState: 'open' | 'closed' = 'open'
  readonly #cut = batchCutter((bytes) => this.push(bytes))
  #line: EngineLine | null
  #unanswered: Batch[] = []
  #stopped: { code: string; message: string } | null = null
  #isUsed = false
  #isOver = false

  constructor(connect: (socket: BridgeSocket) => EngineLine | null) {
    super()
    this.#line = connect(this)
  }

  /** Hands on the engine's answer to the given number of batches. */
  answer(bytes: Uint8Array, answered: number): void {
    if (this.#isOver) return
    this.#unanswered.splice(0, answered)
    if (bytes.length > 0) this.push(Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength))
  }

  /** The engine has stopped, or there is none: refuses with this SQLSTATE code and message, then closes. */
  stop(code: string, message: string): void {
    this.#line = null
    this.#stopped = { code, message }
    // A new connection's first message is still to come; its answer is the refusal.
    if (this.#isUsed) this.#refuse()
  }

  override _read(): void {}

  override _write(bytes: Buffer, _encoding: string, done: (error?: Error | null) => void): void {
    // Not at once: the client cannot bear an answer before its call of `write` has returned.
    queueMicrotask(() => {
      for (const batch of this.#cut(bytes)) this.#pass(batch)
    })
    done()
  }

  override _final(done: (error?: Error | null) => void): void {
    this.#isOver = true
    this.push(null)
    this.#leave()
    done()
  }

  override _destroy(error: Error | null, done: (error?: Error | null) => void): void {
    this.#isOver = true
    this.readyState = 'closed'
    this.#leave()
    done(error)
  }

  #pass(batch: Batch): void {
    if (batch.isFarewell) return this.#leave()
    this.#isUsed = true
    this.#unanswered.push(batch)
    if (this.#stopped !== null) return this.#refuse()
    this.#line?.send(batch)
  }

  /** Answers each group of batches that a Sync ends by one error, as PostgreSQL does, and closes. */
  #refuse(): void {
    if (this.#stopped === null || this.#isOver) return
    const { code, message } = this.#stopped
    let isNew = true
    for (const { isSync } of this.#unanswered.splice(0)) {
      if (isNew) this.push(errorFrame(code, message))
      if (isSync) this.push(READY)
      isNew = isSync
    }
    // Read already, as a rule; where not, destroying would throw the answer away.
    if (this.readableLength === 0) this.destroy()
    else setImmediate(() => this.destroy())
  }

  #leave(): void {
    this.#line?.leave()
    this.#line = null
  }
}
