import { type Answers, answersOn } from './answers.ts'
import type { Reply, Told } from './questions.ts'

const reply = (of: Reply): void => self.postMessage(of, { transfer: [] })

let answers: Answers | null = null

self.addEventListener('message', ({ data }: MessageEvent<Told>) => {
  if (data.kind === 'documents') answers = answersOn(data.documents)
  else if (answers !== null) {
    const { id, question } = data
    const outcome = answers.answer(question, (progress) => reply({ id, kind: 'progress', progress }))
    reply({ id, kind: 'outcome', outcome })
  }
})
