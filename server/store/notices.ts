import type { Database } from './database.ts'
import { channel } from './event-store.ts'

/** Word from other processes that an event was added. */
export interface Notices {
  /**
   * Calls `onTopic` with the topic of each event that any process adds, and `onAll` whenever some may have been
   * missed: after a lost connection is there again, and now and then in case the loss went unseen.
   */
  hear(onTopic: (topic: string) => void, onAll: () => void): Promise<() => Promise<void>>
}

/**
 * Notices through a connection of their own to a server; the embedded engine has one process, and needs none.
 *
 * @param lookEveryMs  time between two calls of `onAll`. [ms]
 */
export const notices = ({ sql, isEmbedded }: Pick<Database, 'sql' | 'isEmbedded'>, lookEveryMs = 5_000): Notices => ({
  async hear(onTopic, onAll) {
    if (isEmbedded) return async () => {}
    const [{ name }] = await sql<{ name: string }[]>`select ${channel(sql)} as name`
    const listening = await sql.listen(name, onTopic, onAll)
    const timer = setInterval(onAll, lookEveryMs)
    return async () => {
      clearInterval(timer)
      await listening.unlisten()
    }
  },
})
