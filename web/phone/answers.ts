import type { z } from 'zod'
import { checkDocument } from '../../server/documents/check.ts'
import { planDocuments } from '../../server/documents/plan-day.ts'
import { planRequest } from '../../server/documents/plan-request.ts'
import { whatIfRequest } from '../../server/documents/what-if.ts'
import { type WhatIfDay, whatIfAnswers, whatIfDay } from '../../server/documents/what-if-model.ts'
import type { Problem } from '../../server/documents/problem.ts'
import { InputError } from '../../server/engine/input-error.ts'
import type { DayQuestion, Outcome, Progress, Question, RaceDocuments, Variant } from './questions.ts'

const dayRequest = whatIfRequest.omit({ variants: true })
const variantsAsked = whatIfRequest.pick({ variants: true })

/** Answers on one race's documents by the service's own schemas, checks and engine. */
export interface Answers {
  answer(question: Question, tell: (progress: Progress) => void): Outcome
}

/** @param documents  as the service hands them out; every question is checked together with them */
export function answersOn(documents: RaceDocuments): Answers {
  let planned: { question: string; day: WhatIfDay } | null = null

  /** A day asked before is not planned again. */
  function dayOf(asked: DayQuestion): WhatIfDay {
    const question = JSON.stringify(asked)
    if (planned?.question !== question)
      planned = { question, day: whatIfDay(checked(dayRequest, { ...documents, ...asked })) }
    return planned.day
  }

  function whatIf({ variants, ...asked }: DayQuestion & { variants: Variant[] }): string {
    const read = checked(variantsAsked, { variants })
    return JSON.stringify(whatIfAnswers(dayOf(asked), read.variants))
  }

  return {
    answer(question, tell) {
      try {
        if (question.kind === 'what-if') return { kind: 'answer', text: whatIf(question.asked) }
        const request = checked(planRequest, { ...documents, ...question.asked })
        return { kind: 'answer', text: JSON.stringify(planDocuments(request, tell)) }
      } catch (error) {
        return refusedBy(error)
      }
    },
  }
}

/** What a schema refuses. */
class Unsound extends Error {
  readonly refusal: Outcome

  constructor(errors: Problem[]) {
    super('What was asked cannot be read.')
    this.refusal = { kind: 'refused', detail: this.message, errors }
  }
}

function checked<S extends z.ZodType>(schema: S, input: unknown): z.output<S> {
  const { document, problems } = checkDocument(schema, input)
  if (problems === undefined) return document
  throw new Unsound(problems)
}

function refusedBy(error: unknown): Outcome {
  if (error instanceof Unsound) return error.refusal
  if (!(error instanceof InputError)) throw error
  const { field, detail } = error
  return { kind: 'refused', detail: `${field}: ${detail}.`, errors: [{ field, detail }] }
}
