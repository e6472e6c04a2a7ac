// Builds what changed since the last start, then serves from the same process, so that a signal
// sent to `npm start` reaches the service. `--build-only` stops after the build.
//
// Only node: modules here: this file runs before anything is known to be installed.
import { spawn } from 'node:child_process'
import { createHash, randomUUID } from 'node:crypto'
import { existsSync } from 'node:fs'
import { copyFile, mkdir, readFile, readdir, rename, rm, stat, writeFile } from 'node:fs/promises'
import { dirname, join, relative, resolve, sep } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'

const ROOT = resolve(dirname(fileURLToPath(import.meta.url)), '..')
const DIST = join(ROOT, 'dist')
const LOCK = join(DIST, '.building')
const OLDEST_NODE = [20, 19]
const LOCK_TOO_OLD_MS = 5 * 60_000

/** What is built, from which sources, and how. The client carries the engine, so it depends on it too. */
const PARTS = [
  {
    name: 'server',
    title: 'the service',
    sources: 'server tsconfig.base.json tsconfig.build.json package-lock.json'.split(' '),
    needs: 'tsconfig.build.json',
    command: (out) => `node_modules/typescript/bin/tsc -p tsconfig.build.json --outDir ${out}`,
  },
  {
    name: 'web',
    title: 'the client',
    sources: 'web server/engine server/documents server/files tsconfig.base.json package-lock.json'.split(' '),
    needs: 'web/index.html',
    command: (out) =>
      `node_modules/vite/bin/vite.js build web --config web/vite.config.ts --outDir ../${out}/web --emptyOutDir --logLevel warn`,
  },
]

const say = (line) => process.stderr.write(`${line}\n`)

function fail(line) {
  say(line)
  process.exit(1)
}

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number)
  if (major > OLDEST_NODE[0] || (major === OLDEST_NODE[0] && minor >= OLDEST_NODE[1])) return
  fail(`Stagewatt needs Node.js ${OLDEST_NODE.join('.')} or later; this is ${process.versions.node}.`)
}

async function filesUnder(path) {
  const found = await stat(path).catch(() => null)
  if (found === null) return []
  if (found.isFile()) return [path]
  const entries = await readdir(path, { recursive: true, withFileTypes: true })
  return entries.filter((entry) => entry.isFile()).map((entry) => join(entry.parentPath, entry.name))
}

/** One hash over names and contents of a part's sources. */
async function hashOf(part) {
  const files = (await Promise.all(part.sources.map((source) => filesUnder(join(ROOT, source))))).flat()
  const hash = createHash('sha256').update(part.command(''))
  for (const file of files.sort((a, b) => (a < b ? -1 : 1))) {
    const content = await readFile(file).catch(() => Buffer.alloc(0))
    hash.update(`\0${relative(ROOT, file).split(sep).join('/')}\0${content.length}\0`).update(content)
  }
  return hash.digest('hex')
}

const stampOf = (part) => join(DIST, `.${part.name}-built-from`)
const isBuilt = async (part, hash) => (await readFile(stampOf(part), 'utf8').catch(() => '')) === hash

async function stale() {
  const checked = await Promise.all(
    PARTS.filter((part) => existsSync(join(ROOT, part.needs))).map(async (part) => {
      const hash = await hashOf(part)
      return { part, hash, isBuilt: await isBuilt(part, hash) }
    }),
  )
  return checked.filter((entry) => !entry.isBuilt)
}

const running = new Set()

/** Output and exit code of one compiler. */
function run(args) {
  return new Promise((done, failed) => {
    const child = spawn(process.execPath, args, { cwd: ROOT, stdio: ['ignore', 'pipe', 'pipe'] })
    running.add(child)
    let output = ''
    child.stdout.on('data', (chunk) => (output += chunk))
    child.stderr.on('data', (chunk) => (output += chunk))
    child.on('error', failed)
    child.on('close', (code) => {
      running.delete(child)
      done({ output: output.trim(), isDone: code === 0 })
    })
  })
}

/**
 * Makes `to` hold the files of `from`. A file is replaced in one step and only if it differs, pages
 * come last and what is gone goes at the end, so a process that runs from `to` never finds half a file.
 */
async function replaceFiles(from, to) {
  const names = (await filesUnder(from)).map((file) => relative(from, file))
  const isPage = (name) => (name.endsWith('.html') ? 1 : 0)
  for (const name of names.sort((a, b) => isPage(a) - isPage(b))) {
    const [fresh, old] = await Promise.all([readFile(join(from, name)), readFile(join(to, name)).catch(() => null)])
    if (old !== null && fresh.equals(old)) continue
    const aside = join(to, `${name}.${randomUUID()}`)
    await mkdir(dirname(aside), { recursive: true })
    await copyFile(join(from, name), aside)
    await rename(aside, join(to, name))
  }
  const kept = new Set(names.map((name) => join(to, name)))
  for (const file of await filesUnder(to)) if (!kept.has(file)) await rm(file, { force: true })
}

async function build({ part, hash }) {
  const startedMs = performance.now()
  say(`Building ${part.title} …`)
  const aside = `dist/.${part.name}-${randomUUID()}`
  const out = join(ROOT, aside)
  try {
    const { output, isDone } = await run(part.command(aside).split(' '))
    if (!isDone) return `${output}\n\nStagewatt could not build ${part.title}; the compiler's errors are above.`
    await replaceFiles(join(out, part.name), join(DIST, part.name))
    await writeFile(stampOf(part), hash)
  } finally {
    await rm(out, { recursive: true, force: true })
  }
  say(`Built ${part.title} in ${((performance.now() - startedMs) / 1000).toFixed(1)} s.`)
  return null
}

/** Two builds at once do no harm, since files are replaced one by one; the lock only saves the work. */
async function takeLock() {
  await mkdir(DIST, { recursive: true })
  for (let told = false; ; told = true) {
    try {
      await mkdir(LOCK)
      await writeFile(join(LOCK, 'pid'), String(process.pid))
      return
    } catch (error) {
      if (error.code !== 'EEXIST') fail(`Stagewatt cannot write to ${DIST}: ${error.message}`)
    }
    if (await isAbandoned()) await rm(LOCK, { recursive: true, force: true })
    else if (!told) say('Waiting for another build to finish …')
    await new Promise((later) => setTimeout(later, 100))
  }
}

async function isAbandoned() {
  const found = await stat(LOCK).catch(() => null)
  if (found === null) return false
  if (Date.now() - found.mtimeMs > LOCK_TOO_OLD_MS) return true
  const pid = Number(await readFile(join(LOCK, 'pid'), 'utf8').catch(() => ''))
  if (!(pid > 0)) return Date.now() - found.mtimeMs > 5000
  try {
    process.kill(pid, 0)
    return false
  } catch (error) {
    return error.code === 'ESRCH'
  }
}

async function buildWhatChanged() {
  if ((await stale()).length === 0) return
  if (!existsSync(join(ROOT, 'node_modules', 'typescript'))) fail('Packages are missing: run "npm ci" first.')
  await takeLock()
  const stop = (signal) => {
    for (const child of running) child.kill()
    void rm(LOCK, { recursive: true, force: true }).finally(() => process.exit(signal === 'SIGINT' ? 130 : 143))
  }
  process.once('SIGTERM', stop).once('SIGINT', stop)
  try {
    const faults = (await Promise.all((await stale()).map(build))).filter((fault) => fault !== null)
    if (faults.length === 0) return
    for (const fault of faults) say(fault)
    process.exitCode = 1
  } finally {
    await rm(LOCK, { recursive: true, force: true })
    process.off('SIGTERM', stop).off('SIGINT', stop)
  }
}

/** npm runs this through a shell that may keep a signal to itself and leave us behind: then stop as if told to. */
function endWithNpm() {
  const parent = process.ppid
  const watch = () => process.ppid !== parent && process.kill(process.pid, 'SIGTERM')
  if (process.env.npm_lifecycle_event !== undefined) setInterval(watch, 250).unref()
}

checkNode()
endWithNpm()
await buildWhatChanged()
if (!process.exitCode && !process.argv.includes('--build-only'))
  await import(pathToFileURL(join(DIST, 'server', 'main.js')).href)
