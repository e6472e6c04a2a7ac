import type { Fragment, Sql } from './guarded-sql.ts'
import { JsonText } from './json-text.ts'
import { checkField, isSlug, isVersion, json, saving, utc } from './storable.ts'

export type DocumentKind = 'car' | 'route' | 'race' | 'sky'

/** A saved version without its body. `savedAt` is ISO 8601 in UTC. */
export interface DocumentEntry {
  id: string
  name: string
  version: number
  savedAt: string
}

export interface StoredDocument extends DocumentEntry {
  body: unknown
}

/** A saved version with its body as the JSON text that it is kept as. */
export interface DocumentText extends DocumentEntry {
  body: JsonText
}

export interface Saved {
  version: number
  savedAt: string
}

/** Someone else was faster: the version that holds now. */
export interface Conflict {
  conflict: number
}

/** Each method runs one atomic statement; those that change something name the version they start from. */
export interface DocumentStore {
  /** Newest save first. */
  list(kind: DocumentKind): Promise<DocumentEntry[]>
  /** The version that holds now, or any version ever saved, a removed document's too. */
  get(kind: DocumentKind, id: string, version?: number): Promise<StoredDocument | null>
  /** The same for handing on, without reading the body. */
  text(kind: DocumentKind, id: string, version?: number): Promise<DocumentText | null>
  /** Version 1; a removed document's id may be used again and its versions go on. */
  create(kind: DocumentKind, id: string, name: string, body: unknown): Promise<Saved | Conflict>
  replace(
    kind: DocumentKind,
    id: string,
    expectedVersion: number,
    name: string,
    body: unknown,
  ): Promise<Saved | Conflict | 'missing'>
  /** Takes the document off the list; its versions stay. */
  remove(kind: DocumentKind, id: string, expectedVersion: number): Promise<'removed' | Conflict | 'missing'>
  /** Every version, newest first. */
  versions(kind: DocumentKind, id: string): Promise<DocumentEntry[]>
}

/**
 * Documents with all their versions.
 *
 * @throws StoreError field-not-storable from `create` and `replace`
 */
export function documentStore(sql: Sql): DocumentStore {
  const savedAt = (): Fragment => sql`${utc(sql, 'saved_at')} as "savedAt"`

  const current = async (kind: DocumentKind, id: string): Promise<number | null> => {
    const rows = await sql<{ version: number }[]>`
      select version from documents where kind = ${kind} and id = ${id} and removed_at is null`
    return rows[0]?.version ?? null
  }
  const conflictOrMissing = async (kind: DocumentKind, id: string): Promise<Conflict | 'missing'> => {
    const version = isSlug(id) ? await current(kind, id) : null
    return version === null ? 'missing' : { conflict: version }
  }

  /** Rows of one version, or of the one that holds now. */
  const at = (kind: DocumentKind, id: string, version: number | undefined): Fragment => sql`
    from documents d join document_versions v using (kind, id)
    where kind = ${kind} and id = ${id}
    and ${version === undefined ? sql`v.version = d.version and d.removed_at is null` : sql`v.version = ${version}`}`
  const canBe = (id: string, version: number | undefined): boolean =>
    isSlug(id) && (version === undefined || isVersion(version))

  const create: DocumentStore['create'] = async (kind, id, name, body) => {
    checkField('id', id, isSlug(id), '1 to 64 lower-case letters, digits or hyphens')
    return saving({ name, body }, async () => {
      const rows = await sql<Saved[]>`
        with head as (
          insert into documents as d (kind, id, version) values (${kind}, ${id}, 1)
          on conflict (kind, id) do update set version = d.version + 1, removed_at = null
          where d.removed_at is not null
          returning version
        )
        insert into document_versions (kind, id, version, name, body)
        select ${kind}, ${id}, version, ${name}, ${json(sql, 'body', body)} from head
        returning version, ${savedAt()}`
      if (rows.length > 0) return rows[0]
      const holds = await conflictOrMissing(kind, id)
      // Removed between the two statements: it is free again.
      return holds === 'missing' ? create(kind, id, name, body) : holds
    })
  }

  return {
    async list(kind) {
      const rows = await sql<DocumentEntry[]>`
        select id, v.name, version, ${savedAt()}
        from documents d join document_versions v using (kind, id, version)
        where kind = ${kind} and d.removed_at is null
        order by v.save_number desc`
      return rows
    },

    async get(kind, id, version) {
      if (!canBe(id, version)) return null
      const rows = await sql<StoredDocument[]>`
        select id, v.name, v.version, ${savedAt()}, v.body ${at(kind, id, version)}`
      return rows[0] ?? null
    },

    async text(kind, id, version) {
      if (!canBe(id, version)) return null
      const rows = await sql<(DocumentEntry & { text: string })[]>`
        select id, v.name, v.version, ${savedAt()}, v.body::text as text ${at(kind, id, version)}`
      if (rows.length === 0) return null
      const { text, ...entry } = rows[0]
      return { ...entry, body: new JsonText(text) }
    },

    create,

    replace(kind, id, expectedVersion, name, body) {
      if (!isSlug(id) || !isVersion(expectedVersion)) return conflictOrMissing(kind, id)
      return saving({ name, body }, async () => {
        const rows = await sql<Saved[]>`
          with head as (
            update documents set version = version + 1
            where kind = ${kind} and id = ${id} and version = ${expectedVersion} and removed_at is null
            returning version
          )
          insert into document_versions (kind, id, version, name, body)
          select ${kind}, ${id}, version, ${name}, ${json(sql, 'body', body)} from head
          returning version, ${savedAt()}`
        return rows.length > 0 ? rows[0] : conflictOrMissing(kind, id)
      })
    },

    async remove(kind, id, expectedVersion) {
      if (!isSlug(id) || !isVersion(expectedVersion)) return conflictOrMissing(kind, id)
      const rows = await sql`
        update documents set removed_at = now()
        where kind = ${kind} and id = ${id} and version = ${expectedVersion} and removed_at is null
        returning version`
      return rows.length > 0 ? 'removed' : conflictOrMissing(kind, id)
    },

    async versions(kind, id) {
      if (!isSlug(id)) return []
      const rows = await sql<DocumentEntry[]>`
        select id, name, version, ${savedAt()} from document_versions
        where kind = ${kind} and id = ${id} order by version desc`
      return rows
    },
  }
}
