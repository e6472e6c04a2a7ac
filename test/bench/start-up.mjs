import { spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'

const START = fileURLToPath(new URL('../../server/start.mjs', import.meta.url))

/** Seconds from the start of the process to its address line; the service is stopped again. */
function startS(dataDir) {
  return new Promise((resolve, reject) => {
    const from = performance.now()
    const child = spawn(process.execPath, [START], {
      env: { ...process.env, DATA_DIR: dataDir, PORT: '0', DATABASE_URL: '' },
      stdio: ['ignore', 'pipe', 'inherit'],
    })
    let tookS = Number.NaN
    child.stdout.on('data', () => {
      if (!Number.isNaN(tookS)) return
      tookS = (performance.now() - from) / 1000
      child.kill('SIGTERM')
    })
    child.once('exit', (code) => (Number.isNaN(tookS) ? reject(new Error(`ended with ${code}`)) : resolve(tookS)))
  })
}

/** First start on an empty folder, demo race loaded, and a second start on the same. */
export async function startUpBench() {
  const dataDir = mkdtempSync(join(tmpdir(), 'stagewatt-bench-'))
  try {
    return { firstS: await startS(dataDir), secondS: await startS(dataDir) }
  } finally {
    rmSync(dataDir, { recursive: true, force: true })
  }
}
