import { closeSync, linkSync, openSync, readdirSync, rmSync } from 'node:fs'
import { connect, createServer, type Server } from 'node:net'
import { join } from 'node:path'
import { randomBytes } from 'node:crypto'
import { errorCode } from './store-error.ts'

const NAME = /^lock\.(\d{1,15})$/

/**
 * Exclusive use of a folder by a listening socket inside it; seen by every process of this kernel that
 * can see the folder, whatever its container. Linux only.
 *
 * The highest lock.N holds. A socket is dead for good once its process is gone, so whoever finds the
 * highest one dead links his own, already listening, to N+1: `link` lets exactly one do so. Only smaller
 * numbers are ever removed, so a slow starter who links an old number sees the higher one and gives way.
 *
 * @param folder  path of an existing folder, of any length
 * @returns a function that lets go; null when another process holds the folder
 * @throws the system's error when the folder's file system has no sockets or links (see `hasNoSockets`)
 */
export async function takeNumberedSocket(folder: string): Promise<(() => Promise<void>) | null> {
  // A socket's path holds 108 bytes at most; through the descriptor every folder's is short.
  const descriptor = openSync(folder, 'r')
  const short = (name: string): string => `/proc/self/fd/${descriptor}/${name}`
  const own = `lock.new-${randomBytes(8).toString('hex')}`
  const server = createServer((caller) => caller.destroy())
  const letGo = async (): Promise<void> => {
    await new Promise<void>((resolve) => server.close(() => resolve()))
    closeSync(descriptor)
  }
  try {
    await listen(server, short(own))
    const isMine = await climb(folder, own, short)
    rmSync(join(folder, own), { force: true })
    if (isMine) return letGo
  } catch (error) {
    rmSync(join(folder, own), { force: true })
    await letGo()
    throw error
  }
  await letGo()
  return null
}

/** True when an error says that a file system knows no sockets or no hard links. */
export const hasNoSockets = (error: unknown): boolean =>
  ['EPERM', 'ENOTSUP', 'EOPNOTSUPP', 'ENOSYS', 'EINVAL', 'EXDEV'].includes(errorCode(error))

/** Links our socket above the highest dead one; false as soon as a living one stands there. */
async function climb(folder: string, own: string, short: (name: string) => string): Promise<boolean> {
  for (;;) {
    const highest = Math.max(0, ...numbers(folder))
    if (highest > 0 && (await isAlive(short(`lock.${highest}`)))) return false
    const next = highest + 1
    try {
      linkSync(join(folder, own), join(folder, `lock.${next}`))
    } catch (error) {
      if (errorCode(error) !== 'EEXIST') throw error
      continue
    }
    const present = numbers(folder)
    if (Math.max(...present) > next) {
      rmSync(join(folder, `lock.${next}`), { force: true })
      continue
    }
    for (const n of present) if (n < next) rmSync(join(folder, `lock.${n}`), { force: true })
    return true
  }
}

const numbers = (folder: string): number[] =>
  readdirSync(folder).flatMap((name) => {
    const match = NAME.exec(name)
    return match === null ? [] : [Number(match[1])]
  })

function isAlive(path: string): Promise<boolean> {
  return new Promise((resolve) => {
    const caller = connect(path, () => {
      caller.destroy()
      resolve(true)
    })
    // Any other refusal (a full backlog, say) comes from a living holder.
    caller.once('error', (error) => resolve(!['ECONNREFUSED', 'ENOENT'].includes(errorCode(error))))
  })
}

/** Resolves when the server listens at the address, rejects with the system's error. */
export function listen(server: Server, address: string): Promise<void> {
  return new Promise((resolve, reject) => {
    server.once('error', reject)
    server.listen(address, () => {
      server.off('error', reject)
      server.unref()
      resolve()
    })
  })
}
