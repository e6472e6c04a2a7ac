import { z } from 'zod'
import { type ErrorCode, Fault } from '../errors.ts'
import type { DocumentStore } from '../store/document-store.ts'
import { answers, COMPUTE_ERRORS, entry, listOf, notice, STORE_ERRORS, versionEntry, WRITE_ERRORS } from './answers.ts'
import { type Api, clientGone, DOCUMENT_LIMIT, type Needs } from './api.ts'
import { bodyContent, bytesOf, formatOf, takeBodies } from './content.ts'
import { readerOptions } from './file-options.ts'
import { findText } from './find.ts'
import { idParam, type KindRoutes, versionQuery } from './kinds.ts'
import { etag, ifMatch, ifNoneMatch } from './preconditions.ts'
import { remove, save } from './save.ts'

/** Reading, saving and taking away the documents of one kind. */
export function documentRoutes(api: Api, needs: Needs, kind: KindRoutes): void {
  takeBodies(api, kind.formats)
  listRoute(api, needs, kind)
  getRoute(api, needs, kind)
  versionsRoute(api, needs, kind)
  putRoute(api, needs, kind)
  deleteRoute(api, needs, kind)
}

function listRoute(api: Api, { store }: Needs, { kind, path }: KindRoutes): void {
  const schema = {
    tags: [path],
    summary: `List the ${path}, last saved first`,
    querystring: z.strictObject({}),
    response: answers({ 200: { description: `the ${path}`, schema: listOf(entry) } }, ['bad-query', ...STORE_ERRORS]),
  }
  api.get(`/${path}`, { schema }, async () => ({ items: await store.documents.list(kind) }))
}

function getRoute(api: Api, { store }: Needs, { kind, path, schema: document }: KindRoutes): void {
  const schema = {
    tags: [path],
    summary: `Get a ${kind}`,
    description: 'ETag is the version in double quotes; If-None-Match with it answers 304.',
    params: idParam(kind),
    querystring: versionQuery,
    response: answers(
      {
        200: { description: `the ${kind} and its version`, schema: entry.extend({ document }) },
        304: { description: 'the version is still the same' },
      },
      ['bad-id', 'bad-query', 'bad-precondition', 'no-such-document', 'no-such-version', ...STORE_ERRORS],
    ),
  }
  api.get(`/${path}/:id`, { schema }, async (request, reply) => {
    const { id, name, version, savedAt, body } = await findText(store, kind, request.params.id, request.query.version)
    reply.header('etag', etag(version)).header('cache-control', 'no-cache')
    const known = ifNoneMatch(request.headers)
    if (known === '*' || known?.includes(version)) return reply.code(304).send()
    return { id, name, version, savedAt, document: body }
  })
}

function versionsRoute(api: Api, { store }: Needs, { kind, path }: KindRoutes): void {
  const schema = {
    tags: [path],
    summary: `List every version of a ${kind}, newest first`,
    params: idParam(kind),
    querystring: z.strictObject({}),
    response: answers({ 200: { description: 'its versions', schema: listOf(versionEntry) } }, [
      'bad-id',
      'bad-query',
      'no-such-document',
      ...STORE_ERRORS,
    ]),
  }
  api.get(`/${path}/:id/versions`, { schema }, async (request) => {
    const items = await versionsOf(store.documents, kind, request.params.id)
    if (items.length === 0) throw new Fault('no-such-document', `There is no ${kind} "${request.params.id}".`)
    return { items }
  })
}

async function versionsOf(documents: DocumentStore, kind: KindRoutes['kind'], id: string) {
  const [versions, current] = await Promise.all([documents.versions(kind, id), documents.list(kind)])
  const isThere = current.some((document) => document.id === id)
  return versions.map(({ version, name, savedAt }, i) => ({ version, name, savedAt, isRemoved: i === 0 && !isThere }))
}

const saved = entry.extend({ notices: z.array(notice), summary: z.unknown().describe('what a file held').optional() })

/** Only kinds that are read from files can have a wrong one. */
export const fileErrors = (kind: KindRoutes): ErrorCode[] => (kind.formats.length > 1 ? ['invalid-file'] : [])

function putRoute(api: Api, needs: Needs, kind: KindRoutes): void {
  const { kind: name, path } = kind
  const schema = {
    tags: [path],
    summary: `Save a ${name}`,
    description:
      'Without If-Match it is created, and must not exist. With If-Match it is replaced if that version still holds.',
    params: idParam(name),
    querystring: kind.query,
    body: bodyContent(kind),
    response: answers(
      {
        200: { description: 'replaced; ETag is the new version', schema: saved },
        201: { description: 'created; Location is its address', schema: saved },
      },
      [
        'bad-id',
        'bad-query',
        'bad-precondition',
        'bad-json',
        'empty-body',
        'invalid-document',
        ...fileErrors(kind),
        'precondition-required',
        'version-changed',
        ...WRITE_ERRORS,
        ...COMPUTE_ERRORS,
        ...STORE_ERRORS,
      ],
    ),
  }
  api.put(`/${path}/:id`, { schema, bodyLimit: DOCUMENT_LIMIT }, async (request, reply) => {
    const condition = { ifMatch: ifMatch(request.headers), ifNoneMatch: ifNoneMatch(request.headers) }
    const format = formatOf(request.headers['content-type'])
    const input = {
      kind: name,
      format,
      bytes: bytesOf(request.body),
      options: readerOptions(name, format, request.query),
    }
    const read = await needs.compute.run('read-document', input, clientGone(reply))
    const { id } = request.params
    const { isNew, version, savedAt } = await save(needs.store.documents, { kind: name, id, ...read }, condition)
    reply.header('etag', etag(version))
    if (isNew) reply.code(201).header('location', `/api/v1/${path}/${id}`)
    return { id, name: read.name, version, savedAt, notices: read.notices, summary: read.summary }
  })
}

function deleteRoute(api: Api, { store }: Needs, { kind, path }: KindRoutes): void {
  const schema = {
    tags: [path],
    summary: `Take a ${kind} away; its versions stay`,
    description: 'Needs If-Match with the version that holds now.',
    params: idParam(kind),
    querystring: z.strictObject({}),
    response: answers({ 204: { description: 'taken away' } }, [
      'bad-id',
      'bad-query',
      'bad-precondition',
      'no-such-document',
      'precondition-required',
      'version-changed',
      'other-host',
      'other-origin',
      ...STORE_ERRORS,
    ]),
  }
  api.delete(`/${path}/:id`, { schema }, async (request, reply) => {
    await remove(store.documents, kind, request.params.id, ifMatch(request.headers))
    return reply.code(204).send()
  })
}
