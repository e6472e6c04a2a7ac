import { type ChildProcess, fork } from 'node:child_process'
import { fileURLToPath } from 'node:url'

export type Take = 'database' | 'folder' | 'socket'

export interface Outcome {
  outcome: string
  code?: string
}

const SCRIPT = fileURLToPath(new URL('./contender.mjs', import.meta.url))

const answer = (child: ChildProcess): Promise<Outcome> =>
  new Promise((resolve, reject) => {
    child.once('message', (message: Outcome) => {
      child.off('exit', reject)
      resolve(message)
    })
    child.once('exit', reject)
  })

async function contender(folder: string): Promise<ChildProcess> {
  const child = fork(SCRIPT, [folder], { execArgv: [], stdio: ['ignore', 'ignore', 'inherit', 'ipc'] })
  await answer(child)
  return child
}

const ended = (child: ChildProcess): Promise<unknown> => new Promise((resolve) => child.once('exit', resolve))

export interface Contest {
  /** All try at the same moment; who opened is then killed or lets go, so that the next round may open. */
  round(take: Take, end: 'kill' | 'let go'): Promise<Outcome[]>
  over(): Promise<void>
}

/** Processes that are started and wait for the sign to take one folder. */
export async function contest(folder: string, count: number): Promise<Contest> {
  const children = await Promise.all(Array.from({ length: count }, () => contender(folder)))

  const replace = async (at: number): Promise<void> => {
    const gone = ended(children[at])
    children[at].kill('SIGKILL')
    await gone
    children[at] = await contender(folder)
  }
  const round: Contest['round'] = async (take, end) => {
    const answers = children.map(answer)
    for (const child of children) child.send({ take })
    const outcomes = await Promise.all(answers)
    for (const [at, { outcome }] of outcomes.entries()) {
      if (outcome !== 'open') continue
      if (end === 'kill') {
        await replace(at)
      } else {
        const letGo = answer(children[at])
        children[at].send({ letGo: true })
        await letGo
      }
    }
    return outcomes
  }
  const over = async (): Promise<void> => {
    const gone = children.map(ended)
    for (const child of children) child.disconnect()
    await Promise.all(gone)
  }
  return { round, over }
}
