import { Duplex } from 'node:stream'
import { type Batch, batchCutter, errorFrame, READY } from './wire.ts'

/** How the socket reaches the engine. */
export interface EngineLine {
  send(batch: Batch): void
  leave(): void
}

// Long enough for the client to roll a transaction back while the socket still answers.
const GRACE_MS = 25

/**
 * The client's end of a connection to the embedded engine.
 *
 * When the engine stops, what is unanswered is answered by an error, and so is what the client sends in
 * the short time after; only then the socket closes. (The client cannot bear a socket that closes under a
 * statement: it would write its ROLLBACK to none.)
 */
export class BridgeSocket extends Duplex {
  /** Read by the client before it says goodbye. */
  readyState: 'open' | 'closed' = 'open'
  readonly #cut = batchCutter((bytes) => this.push(bytes))
  #line: EngineLine | null
  #unanswered: Batch[] = []
  #stopped: { code: string; message: string } | null = null
  #hasErred = false
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

  /** The engine has stopped: refuses everything with this SQLSTATE code and message, then closes. */
  stop(code: string, message: string): void {
    this.#line = null
    this.#stopped = { code, message }
    for (const batch of this.#unanswered.splice(0)) this.#refuse(batch)
    setTimeout(() => this.destroy(), GRACE_MS)
  }

  override _read(): void {}

  override _write(bytes: Buffer, _encoding: string, done: (error?: Error | null) => void): void {
    for (const batch of this.#cut(bytes)) this.#pass(batch)
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
    if (this.#stopped !== null) return this.#refuse(batch)
    this.#unanswered.push(batch)
    this.#line?.send(batch)
  }

  /** One error for each group of batches that a Sync ends, as PostgreSQL does. */
  #refuse(batch: Batch): void {
    if (this.#stopped === null || this.#isOver) return
    if (!this.#hasErred) this.push(errorFrame(this.#stopped.code, this.#stopped.message))
    this.#hasErred = !batch.isSync
    if (batch.isSync) this.push(READY)
  }

  #leave(): void {
    this.#line?.leave()
    this.#line = null
  }
}
