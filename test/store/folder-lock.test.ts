import { mkdirSync, readdirSync, rmSync, symlinkSync } from 'node:fs'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { lockFolder } from '../../server/store/folder-lock.ts'
import { type Contest, contest, type Outcome } from './contenders.ts'
import { newFolder, warmFolder } from './engines.ts'

const STARTERS = 10
const ROUNDS = 20

let folder: string
let contenders: Contest | null = null

beforeEach(() => {
  folder = newFolder()
})
afterEach(async () => {
  await contenders?.over()
  contenders = null
  rmSync(folder, { recursive: true, force: true })
})

const refused = (path: string): string =>
  `The data folder ${path} is in use by another running copy of Stagewatt. ` +
  'Stop that one first, or set DATA_DIR to another folder.'

function expectOne(outcomes: Outcome[], refusal: string): void {
  expect(outcomes.map(({ outcome }) => outcome).sort()).toEqual(
    [...Array.from({ length: STARTERS - 1 }, () => refusal), 'open'].sort(),
  )
}

describe('of ten services that start at once on one data folder', () => {
  it('exactly one opens and nine say so, twenty times, after a kill −9 too', { timeout: 300_000 }, async () => {
    await warmFolder(folder)
    contenders = await contest(folder, STARTERS)
    for (let n = 0; n < ROUNDS; n++) {
      expectOne(await contenders.round('database', n % 2 === 0 ? 'kill' : 'let go'), refused(folder))
    }
  })

  it('the same holds for a folder whose path is over 108 bytes', { timeout: 300_000 }, async () => {
    const long = join(folder, 'x'.repeat(100), 'y'.repeat(100))
    mkdirSync(long, { recursive: true })
    contenders = await contest(long, STARTERS)
    for (let n = 0; n < ROUNDS; n++) {
      expectOne(await contenders.round('folder', n % 2 === 0 ? 'kill' : 'let go'), refused(long))
    }
    await warmFolder(long)
    for (let n = 0; n < ROUNDS; n++) {
      expectOne(await contenders.round('database', n % 2 === 0 ? 'kill' : 'let go'), refused(long))
    }
  })

  // What tells apart two containers that share a volume: there the abstract name is not seen.
  it.runIf(process.platform === 'linux')(
    'the sockets inside the folder alone let exactly one in, forty times',
    { timeout: 300_000 },
    async () => {
      contenders = await contest(folder, STARTERS)
      for (let n = 0; n < 40; n++) {
        expectOne(await contenders.round('socket', n % 4 === 0 ? 'kill' : 'let go'), 'taken')
      }
      expect(readdirSync(folder).filter((name) => name.startsWith('lock'))).toHaveLength(1)
    },
  )
})

it('a folder is one folder by whatever path it is reached', async () => {
  const link = join(folder, 'link')
  const real = join(folder, 'real')
  mkdirSync(real)
  symlinkSync(real, link)
  const letGo = await lockFolder(real)
  await expect(lockFolder(link)).rejects.toMatchObject({ code: 'data-folder-in-use', message: refused(link) })
  await letGo()
  await (await lockFolder(link))()
})

it('two folders do not stand in each other’s way', async () => {
  mkdirSync(join(folder, 'a'))
  mkdirSync(join(folder, 'b'))
  const both = await Promise.all([lockFolder(join(folder, 'a')), lockFolder(join(folder, 'b'))])
  for (const letGo of both) await letGo()
})
