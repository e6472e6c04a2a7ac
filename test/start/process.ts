import { type ChildProcess, spawn } from 'node:child_process'
import { once } from 'node:events'
import { fileURLToPath } from 'node:url'

export const ROOT = fileURLToPath(new URL('../..', import.meta.url))

export interface Running {
  child: ChildProcess
  out(): string
  err(): string
  /** Address that the service printed. */
  address(): Promise<string>
  /** Token of the owner's link that it printed. */
  ownerToken(): Promise<string>
  /** What the first group of a pattern found in what it printed. */
  printed(pattern: RegExp): Promise<string>
  /** Exit code, or the signal that ended it. */
  ended: Promise<number | string>
}

/** A command of the project with an environment of its own; anything still running ends with `stopAll`. */
export function run(command: string[], env: Record<string, string>, cwd = ROOT): Running {
  const kept = Object.entries(process.env).filter(([name]) => ['PATH', 'HOME', 'SystemRoot', 'TEMP'].includes(name))
  const child = spawn(command[0], command.slice(1), {
    cwd,
    env: { ...Object.fromEntries(kept), ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  let out = ''
  let err = ''
  child.stdout.on('data', (chunk) => (out += String(chunk)))
  child.stderr.on('data', (chunk) => (err += String(chunk)))
  const ended = once(child, 'close').then(([code, signal]: unknown[]) =>
    typeof code === 'number' ? code : String(signal),
  )
  started.push(child)
  const printed = async (pattern: RegExp): Promise<string> => {
    for (;;) {
      const found = pattern.exec(out)
      if (found !== null) return found[1]
      if (child.exitCode !== null || child.signalCode !== null)
        throw new Error(`it ended with ${child.exitCode ?? child.signalCode}:\n${out}${err}`)
      await Promise.race([once(child.stdout, 'data'), ended])
    }
  }
  const address = () => printed(/Stagewatt is at (\S+)\n/)
  const ownerToken = () => printed(/#owner=(\S+)\n/)
  return { child, out: () => out, err: () => err, address, ownerToken, printed, ended }
}

const started: ChildProcess[] = []

export function stopAll(): void {
  for (const child of started.splice(0)) child.kill('SIGKILL')
}
