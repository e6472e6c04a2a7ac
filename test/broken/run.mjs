// Breaks a copy of the code in one place after another, as each .diff here says, and asks that the test it names notices.
import { execFileSync, spawnSync } from 'node:child_process'
import { cpSync, mkdtempSync, readFileSync, readdirSync, rmSync, symlinkSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { basename, join } from 'node:path'
import { fileURLToPath } from 'node:url'

const HERE = fileURLToPath(new URL('.', import.meta.url))
const PROJECT = join(HERE, '..', '..')
const LEFT_OUT = new Set(['node_modules', 'dist', 'data', '.git', 'coverage'])
const VITEST = join(PROJECT, 'node_modules', 'vitest', 'vitest.mjs')

/** What a .diff asks for: the lines before the change itself. */
function askedBy(name) {
  const text = readFileSync(join(HERE, name), 'utf8')
  const line = (key) => text.match(new RegExp(`^${key}: (.+)$`, 'm'))?.[1].trim()
  const [test, what] = [line('Must fail'), line('What')]
  if (test === undefined || what === undefined) throw new Error(`${name}: expected the lines "Must fail:" and "What:"`)
  return { name, test, what }
}

/** How many assertions of a test file fail in the copy; a file that does not even load counts as none. */
function failuresOf(copy, test) {
  const args = [VITEST, 'run', '--reporter=json', '--root', copy, test]
  const env = { ...process.env, STAGEWATT_NO_BUILD: '1' }
  const { stdout } = spawnSync(process.execPath, args, { cwd: copy, env, encoding: 'utf8', maxBuffer: 1 << 28 })
  const start = stdout.indexOf('{"numTotalTestSuites"')
  if (start < 0) throw new Error(`${test}: no result\n${stdout.slice(-2000)}`)
  const { numTotalTests, numFailedTests, testResults } = JSON.parse(stdout.slice(start))
  const first = testResults.flatMap((file) => file.assertionResults).find((one) => one.status === 'failed')
  return { total: numTotalTests, failed: numFailedTests, first: first?.fullName ?? '' }
}

const apply = (copy, name, ...how) =>
  execFileSync('git', ['apply', ...how, join(HERE, name)], { cwd: copy, stdio: ['ignore', 'ignore', 'pipe'] })

const wanted = process.argv.slice(2)
const asked = readdirSync(HERE)
  .filter((name) => name.endsWith('.diff') && (wanted.length === 0 || wanted.includes(name)))
  .sort()
  .map(askedBy)
const copy = mkdtempSync(join(tmpdir(), 'stagewatt-broken-'))
const wrong = []
try {
  cpSync(PROJECT, copy, { recursive: true, filter: (from) => !LEFT_OUT.has(basename(from)) })
  symlinkSync(join(PROJECT, 'node_modules'), join(copy, 'node_modules'), 'junction')
  for (const test of new Set(asked.map((one) => one.test))) {
    const { total, failed } = failuresOf(copy, test)
    if (total === 0 || failed > 0) wrong.push(`${test}: ${failed} of ${total} fail in sound code`)
  }
  for (const { name, test, what } of asked) {
    try {
      apply(copy, name)
    } catch (error) {
      wrong.push(`${name}: does not fit the code\n${error.stderr}`)
      continue
    }
    const { total, failed, first } = failuresOf(copy, test)
    apply(copy, name, '-R')
    const isNoticed = failed > 0
    if (!isNoticed) wrong.push(`${name}: ${test} does not notice (${total} tests passed)`)
    console.log(`${isNoticed ? 'noticed' : 'MISSED '}  ${what}\n         ${failed} of ${total} in ${test}: ${first}`)
  }
} finally {
  rmSync(copy, { recursive: true, force: true })
}
console.log(`${asked.length - wrong.length} of ${asked.length} breaks noticed`)
for (const line of wrong) console.error(line)
if (wrong.length > 0 || asked.length === 0) process.exit(1)
