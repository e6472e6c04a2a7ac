import { fork } from 'node:child_process'
import { existsSync, readdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { fileURLToPath } from 'node:url'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { openDatabase } from '../../server/store/database.ts'
import { newFolder, warmFolder, WORKER } from './engines.ts'

const SCRIPT = fileURLToPath(new URL('./writer.mjs', import.meta.url))
const KILLS = 20

type Report = { found: number[] } | { written: number }

interface Run {
  found: number[] | null
  written: number[]
}

/** Starts a writer and kills it (SIGKILL) so long after its start or, if it says so, after its first row. */
async function writeAndKill(folder: string, from: 'start' | 'first row', afterMs: number): Promise<Run> {
  const run: Run = { found: null, written: [] }
  const child = fork(SCRIPT, [folder], { execArgv: [], stdio: ['ignore', 'ignore', 'inherit', 'ipc'] })
  const ended = new Promise<number | null>((resolve) => child.once('exit', resolve))
  const firstRow = new Promise<void>((resolve) => {
    child.on('message', (report: Report) => {
      if ('found' in report) run.found = report.found
      else run.written.push(report.written)
      if (run.written.length > 0) resolve()
    })
  })
  if (from === 'first row') await Promise.race([firstRow, ended])
  await pause(afterMs)
  child.kill('SIGKILL')
  expect(await ended, 'the writer ended by itself').toBeNull()
  return run
}

describe('a service killed by kill −9', () => {
  let folder: string
  beforeEach(() => {
    folder = newFolder()
  })
  afterEach(() => rmSync(folder, { recursive: true, force: true }))

  it('keeps every acknowledged row, twenty times while it writes', { timeout: 300_000 }, async () => {
    await warmFolder(folder)
    const acknowledged: number[] = []
    for (let n = 0; n <= KILLS; n++) {
      const run = await writeAndKill(folder, 'first row', (n * 37) % 200)
      // One row more than acknowledged may be there: committed, but killed before it could be said.
      const found = run.found ?? []
      expect(found.slice(0, acknowledged.length)).toEqual(acknowledged)
      expect(found.length).toBeLessThanOrEqual(acknowledged.length + 1)
      acknowledged.splice(0, Infinity, ...found, ...run.written)
    }
    expect(acknowledged.length).toBeGreaterThan(KILLS * 5)
  })

  it('starts as if nothing had been when it was killed during its very first start', { timeout: 300_000 }, async () => {
    for (const afterMs of [700, 2500]) await writeAndKill(folder, 'start', afterMs)
    const database = await openDatabase({ dataDir: folder, workerUrl: WORKER })
    expect(await database.sql`select 1 as one`).toEqual([{ one: 1 }])
    await database.close()
    expect(readdirSync(folder).filter((name) => !name.startsWith('lock'))).toEqual(['pg18'])
  })

  it('does not take a half-made database for a whole one', { timeout: 300_000 }, async () => {
    // Waits until the first files of the new database are there: the kill then falls into its making.
    const child = fork(SCRIPT, [folder], { execArgv: [], stdio: ['ignore', 'ignore', 'inherit', 'ipc'] })
    const ended = new Promise((resolve) => child.once('exit', resolve))
    while (!existsSync(join(folder, 'pg18.new', 'PG_VERSION'))) await pause(5)
    child.kill('SIGKILL')
    await ended
    expect(readdirSync(folder)).not.toContain('pg18')
    const run = await writeAndKill(folder, 'first row', 0)
    expect(run.found).toEqual([])
    expect(readdirSync(folder)).not.toContain('pg18.new')
  })
})
