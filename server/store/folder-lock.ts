import { createHash } from 'node:crypto'
import { closeSync, constants, openSync, statSync } from 'node:fs'
import { createServer } from 'node:net'
import { join } from 'node:path'
import { hasNoSockets, listen, takeNumberedSocket } from './numbered-socket.ts'
import { errorCode, StoreError } from './store-error.ts'

/** Lets go of a folder; the operating system does the same when the process ends in any way. */
export type LetGo = () => Promise<void>

/**
 * Exclusive use of a data folder by this process, taken in one step and dropped by the kernel with its
 * holder, so that there is no stale state to judge.
 *
 * Linux: an abstract socket named for the folder's device and inode (no file, one step, whatever the
 * path's length or spelling), and a numbered socket inside the folder, because abstract names are seen
 * within one network namespace only and two containers may share a volume. A file system without sockets
 * leaves the first alone. Windows: a named pipe's first instance. macOS and BSD: open(2) with O_EXLOCK.
 * None of them reaches across machines: a network share must not be used by two.
 *
 * @param folder  path of an existing folder
 * @throws StoreError data-folder-in-use
 */
export async function lockFolder(folder: string): Promise<LetGo> {
  const letGo = await take(folder)
  if (letGo !== null) return letGo
  throw new StoreError(
    'data-folder-in-use',
    `The data folder ${folder} is in use by another running copy of Stagewatt. ` +
      'Stop that one first, or set DATA_DIR to another folder.',
  )
}

function take(folder: string): Promise<LetGo | null> {
  switch (process.platform) {
    case 'linux':
    case 'android':
      return takeOnLinux(folder)
    case 'win32':
      return takeName(`\\\\.\\pipe\\${lockName(folder)}`)
    default:
      return Promise.resolve(takeFile(join(folder, 'lock')))
  }
}

async function takeOnLinux(folder: string): Promise<LetGo | null> {
  const letGoName = await takeName(`\0${lockName(folder)}`)
  if (letGoName === null) return null
  const letGoSocket = await takeNumberedSocket(folder).catch((error: unknown) => {
    if (hasNoSockets(error)) return async () => {}
    throw error
  })
  if (letGoSocket === null) {
    await letGoName()
    return null
  }
  return async () => {
    await letGoSocket()
    await letGoName()
  }
}

/** Device and inode rather than the path: a link or a second mount point is the same folder. */
function lockName(folder: string): string {
  const { dev, ino } = statSync(folder, { bigint: true })
  return `stagewatt-${createHash('sha256').update(`${dev}:${ino}`).digest('hex').slice(0, 32)}`
}

async function takeName(address: string): Promise<LetGo | null> {
  const server = createServer((caller) => caller.destroy())
  try {
    await listen(server, address)
  } catch (error) {
    if (errorCode(error) === 'EADDRINUSE') return null
    throw error
  }
  return () => new Promise((resolve) => server.close(() => resolve()))
}

// Not among Node's constants; the same on macOS and the BSDs. [fcntl.h]
const O_NONBLOCK = 0x4
const O_EXLOCK = 0x20

function takeFile(path: string): LetGo | null {
  try {
    const descriptor = openSync(path, constants.O_RDWR | constants.O_CREAT | O_NONBLOCK | O_EXLOCK, 0o600)
    return async () => closeSync(descriptor)
  } catch (error) {
    if (['EAGAIN', 'EWOULDBLOCK'].includes(errorCode(error))) return null
    throw error
  }
}
