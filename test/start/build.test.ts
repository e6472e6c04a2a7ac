import { execFile } from 'node:child_process'
import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs'
import { builtinModules } from 'node:module'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest'
import { ROOT } from './process.ts'

let root: string
beforeAll(() => {
  root = mkdtempSync(join(tmpdir(), 'stagewatt-build-'))
  for (const name of [
    'package.json',
    'package-lock.json',
    'tsconfig.base.json',
    'tsconfig.build.json',
    'server/start.mjs',
  ])
    cpSync(join(ROOT, name), join(root, name))
  symlinkSync(join(ROOT, 'node_modules'), join(root, 'node_modules'), 'junction')
})
beforeEach(() => {
  rmSync(join(root, 'dist'), { recursive: true, force: true })
  source('main.ts', "import { word } from './word.ts'\nprocess.stdout.write(`${word}\\n`)\n")
  source('word.ts', "export const word: string = 'one'\n")
})
afterAll(() => rmSync(root, { recursive: true, force: true }))

const source = (name: string, text: string): void => {
  mkdirSync(join(root, 'server'), { recursive: true })
  writeFileSync(join(root, 'server', name), text)
}

const start = (...args: string[]): Promise<{ code: number; out: string; err: string }> =>
  new Promise((done) => {
    execFile(process.execPath, [join(root, 'server', 'start.mjs'), ...args], (error, out, err) => {
      done({ code: error === null ? 0 : Number(error.code), out, err })
    })
  })

describe('a start', () => {
  test('builds once, then serves at once, and builds again what changed', async () => {
    const first = await start()
    expect(first).toMatchObject({ code: 0, out: 'one\n' })
    expect(first.err).toMatch(/^Building the service …\nBuilt the service in [\d.]+ s\.\n$/)
    expect(await start()).toEqual({ code: 0, out: 'one\n', err: '' })
    source('word.ts', "export const word: string = 'two'\n")
    expect(await start()).toMatchObject({ code: 0, out: 'two\n' })
  })

  test('with --build-only serves nothing', async () => {
    expect(await start('--build-only')).toMatchObject({ code: 0, out: '' })
  })

  test('with a fault in the code ends with the compiler’s words and serves nothing', async () => {
    source('word.ts', "export const word: number = 'one'\n")
    const answer = await start()
    expect(answer).toMatchObject({ code: 1, out: '' })
    expect(answer.err).toContain('server/word.ts(1,14): error TS2322')
    source('word.ts', "export const word: string = 'mended'\n")
    expect(await start()).toMatchObject({ code: 0, out: 'mended\n' })
  })

  test('leaves no file of a source that is gone', async () => {
    source('gone.ts', 'export const gone = 1\n')
    await start('--build-only')
    expect(readFileSync(join(root, 'dist/server/gone.js'), 'utf8')).toContain('gone')
    rmSync(join(root, 'server/gone.ts'))
    await start('--build-only')
    expect(() => readFileSync(join(root, 'dist/server/gone.js'))).toThrow('ENOENT')
  })

  test('at the same time as three others builds once', async () => {
    const answers = await Promise.all([start(), start(), start(), start()])
    for (const answer of answers) expect(answer).toMatchObject({ code: 0, out: 'one\n' })
    expect(answers.filter((answer) => answer.err.includes('Built the service'))).toHaveLength(1)
  })

  test('is not held up by a build that was killed', async () => {
    mkdirSync(join(root, 'dist/.building'), { recursive: true })
    // No process has this id: the largest one is 4,194,304 on Linux, 99,999 on macOS.
    writeFileSync(join(root, 'dist/.building/pid'), '99999999')
    expect(await start()).toMatchObject({ code: 0, out: 'one\n' })
  })
})

test('the build needs production packages only', () => {
  const text = readFileSync(join(ROOT, 'server/start.mjs'), 'utf8')
  const { dependencies }: { dependencies: Record<string, string> } = JSON.parse(
    readFileSync(join(ROOT, 'package.json'), 'utf8'),
  )
  const imports = [...text.matchAll(/from '([^']+)'/g)].map((found) => found[1])
  expect(imports.length).toBeGreaterThan(4)
  for (const name of imports) expect(builtinModules).toContain(name.replace('node:', ''))
  const tools = [...text.matchAll(/node_modules\/([\w-]+)\//g)].map((found) => found[1])
  expect([...new Set(tools)].sort((a, b) => (a < b ? -1 : 1))).toEqual(['typescript', 'vite'])
  for (const tool of tools) expect(dependencies).toHaveProperty(tool)
})
