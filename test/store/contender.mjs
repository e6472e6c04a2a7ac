// A process that wants a data folder, for folder-lock.test.ts. On { take: 'database' | 'folder' | 'socket' }
// it tries and answers { outcome }; on { letGo: true } it lets go.
import { openDatabase } from '../../dist/server/store/database.js'
import { lockFolder } from '../../dist/server/store/folder-lock.js'
import { takeNumberedSocket } from '../../dist/server/store/numbered-socket.js'

const folder = process.argv[2]
const workerUrl = new URL('../../dist/server/store/embedded-worker.js', import.meta.url)

const takes = {
  database: async () => {
    const database = await openDatabase({ dataDir: folder, workerUrl })
    await database.sql`select 1`
    return database.close
  },
  folder: () => lockFolder(folder),
  socket: async () => {
    const letGo = await takeNumberedSocket(folder)
    if (letGo === null) throw new Error('taken')
    return letGo
  },
}

let letGo = async () => {}

async function take(message) {
  if (message.letGo) {
    await letGo()
    process.send({ outcome: 'let go' })
    return
  }
  try {
    letGo = await takes[message.take]()
    process.send({ outcome: 'open' })
  } catch (error) {
    process.send({ outcome: error.message, code: error.code })
  }
}

process.on('message', (message) => void take(message))
process.on('disconnect', () => process.exit(0))
process.send({ outcome: 'here' })
