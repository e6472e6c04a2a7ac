import { existsSync, mkdirSync, mkdtempSync, realpathSync, renameSync, rmdirSync, rmSync, statfsSync } from 'node:fs'
import { join } from 'node:path'
import { errorCode, errorMessage, StoreError } from './store-error.ts'
import { syncFolder } from './synced-folder.ts'

const MIB = 1024 * 1024
const NEW_DATABASE_BYTES = 150 * MIB
const OPEN_DATABASE_BYTES = 48 * MIB

/** Name of the database's folder inside the data folder; 18 is the engine's PostgreSQL version. */
const DATABASE = 'pg18'

/**
 * The data folder as it really is, made if need be.
 *
 * @throws StoreError data-folder-unwritable, naming folder and cause
 */
export function prepareFolder(folder: string): string {
  try {
    mkdirSync(folder, { recursive: true, mode: 0o700 })
    // Asked by doing it: permissions alone do not tell, least of all to root.
    rmdirSync(mkdtempSync(join(folder, 'writable-')))
    return realpathSync(folder)
  } catch (error) {
    throw unwritable(folder, error)
  }
}

/** The fault of a folder that cannot be written, with the system's reason in plain words. */
export function unwritable(folder: string, error: unknown): StoreError {
  const reasons: Record<string, string> = {
    EEXIST: 'there is a file of that name',
    ENOTDIR: 'a part of its path is a file',
    EACCES: 'this user may not write there',
    EPERM: 'this user may not write there',
    EROFS: 'it is on a read-only disk',
    ENOSPC: 'the disk is full',
  }
  const reason = reasons[errorCode(error)] ?? errorMessage(error)
  return new StoreError(
    'data-folder-unwritable',
    `The data folder ${folder} cannot be written: ${reason}. Make it writable, or set DATA_DIR to another folder.`,
    { cause: error },
  )
}

/** The fault of a database that does not open, with the engine's reason. */
export function unreadable(path: string, reason: string): StoreError {
  const isFull = /no space left/i.test(reason)
  const advice = isFull
    ? 'Free some space; nothing that was saved is lost.'
    : 'If its files were damaged, put back a copy, or set DATA_DIR to an empty folder.'
  return new StoreError(
    isFull ? 'data-folder-full' : 'data-folder-unreadable',
    `The embedded database in ${path} did not start: ${reason}. ${advice}`,
  )
}

/**
 * Path of the database inside a data folder, made first where there is none: built aside and renamed
 * when whole, so that a kill half-way leaves nothing to trip over.
 *
 * @param build  fills an empty path with a database and forces it to the disk
 * @throws StoreError data-folder-full before anything is written
 */
export async function databaseFolder(folder: string, build: (path: string) => Promise<void>): Promise<string> {
  const path = join(folder, DATABASE)
  if (existsSync(path)) {
    // Without it the engine would try to make a new database over the old one.
    if (!existsSync(join(path, 'PG_VERSION'))) throw unreadable(path, 'its file PG_VERSION is missing')
    checkSpace(folder, OPEN_DATABASE_BYTES)
    return path
  }
  checkSpace(folder, NEW_DATABASE_BYTES)
  const aside = `${path}.new`
  rmSync(aside, { recursive: true, force: true })
  await build(aside)
  renameSync(aside, path)
  syncFolder(folder)
  return path
}

function checkSpace(folder: string, neededBytes: number): void {
  const { bavail, bsize } = statfsSync(folder)
  const freeBytes = bavail * bsize
  if (freeBytes >= neededBytes) return
  throw new StoreError(
    'data-folder-full',
    `The disk of the data folder ${folder} has ${Math.floor(freeBytes / MIB)} MB free; ` +
      `the database needs ${neededBytes / MIB} MB to start. Free some space, or set DATA_DIR to another folder.`,
  )
}
