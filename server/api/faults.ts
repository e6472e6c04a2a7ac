import type { Socket } from 'node:net'
import type { FastifyBaseLogger, FastifyReply, FastifyRequest } from 'fastify'
import { ERRORS, Fault, PROBLEM_TYPE, problemAnswer } from '../errors.ts'
import { type Api, ClientGone } from './api.ts'
import { faultOf } from './fault-of.ts'

/** Answers every error as application/problem+json; what the service itself did wrong is logged once. */
export function answerFaults(app: Api): void {
  app.setErrorHandler((error, request, reply) => {
    sendFault(error, request, reply)
  })
}

export function sendFault(error: unknown, request: FastifyRequest, reply: FastifyReply): void {
  const fault = faultOf(error)
  const { status } = ERRORS[fault.code]
  if (status >= 500 && !(error instanceof ClientGone)) logFault(request.log, fault)
  void reply
    .code(status)
    .headers({ ...fault.headers, 'cache-control': 'no-store' })
    .type(PROBLEM_TYPE)
    .send(JSON.stringify(problemAnswer(fault)))
}

function logFault(log: FastifyBaseLogger, fault: Fault): void {
  const cause = fault.cause instanceof Error ? (fault.cause.stack ?? fault.cause.message) : fault.cause
  const line = { code: fault.code, cause }
  if (ERRORS[fault.code].status === 500) log.error(line, fault.message)
  else log.warn(line, fault.message)
}

const CLIENT_ERRORS: Record<string, Fault> = {
  ERR_HTTP_REQUEST_TIMEOUT: new Fault('request-timeout', 'The request did not arrive in time.'),
  HPE_HEADER_OVERFLOW: new Fault('headers-too-large', 'The headers of the request are too large.'),
}

/** Answers what is no HTTP request, or too slow a one, before there is a request to speak of. */
export function answerClientError(error: Error & { code?: string }, socket: Socket): void {
  if (error.code === 'ECONNRESET' || socket.destroyed || !socket.writable) return
  const fault = CLIENT_ERRORS[error.code ?? ''] ?? new Fault('bad-request', 'This is not a request that HTTP knows.')
  const body = JSON.stringify(problemAnswer(fault))
  const { status, title } = ERRORS[fault.code]
  const head = `HTTP/1.1 ${status} ${title}\r\nContent-Type: ${PROBLEM_TYPE}\r\nContent-Length: ${Buffer.byteLength(body)}`
  socket.end(`${head}\r\nConnection: close\r\n\r\n${body}`)
}
