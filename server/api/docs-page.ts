import { ERRORS } from '../errors.ts'
import { componentOf, type FieldRow, fieldRows, type JsonSchema, typeOf } from './docs-fields.ts'

interface Answer {
  description: string
  content?: Record<string, { schema: JsonSchema }>
}

interface Operation {
  tags?: string[]
  summary?: string
  description?: string
  parameters?: { name: string; in: string; required?: boolean; description?: string; schema: JsonSchema }[]
  requestBody?: { content: Record<string, { schema: JsonSchema }> }
  responses: Record<string, Answer>
}

/** The parts of the API's description that the page shows. */
export interface ApiDescription {
  info: { title: string; version: string; description?: string }
  tags?: { name: string; description?: string }[]
  paths: Record<string, Record<string, Operation>>
  components: { schemas: Record<string, JsonSchema> }
}

/** The description of the API as one page of plain HTML, without scripts or inline styles. */
export function docsPage(api: ApiDescription): string {
  const tags = api.tags ?? []
  const links = [...tags.map(({ name }) => [`tag-${name}`, name]), ['documents', 'documents'], ['errors', 'errors']]
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>${text(api.info.title)} API</title>
<link rel="stylesheet" href="/api/docs.css">
</head>
<body>
<h1>${text(api.info.title)} API</h1>
<p>Version ${text(api.info.version)}. <a href="/api/openapi.json">OpenAPI 3.1</a></p>
<p>${text(api.info.description ?? '')}</p>
<nav><ul>${links.map(([id, name]) => `<li><a href="#${text(id)}">${text(name)}</a></li>`).join('')}</ul></nav>
${tags.map((tag) => tagSection(api, tag)).join('\n')}
<h2 id="documents">Documents</h2>
<p>Unknown fields are refused. Fields with a default may be left out.</p>
${Object.entries(api.components.schemas).map(componentSection).join('\n')}
<h2 id="errors">Errors</h2>
<p>Every error is application/problem+json; <code>code</code> says which, <code>errors</code> lists the fields.</p>
${table(
  ['code', 'status', 'meaning'],
  Object.entries(ERRORS).map(([code, { status, title }]) => [`<code>${code}</code>`, String(status), text(title)]),
)}
</body>
</html>
`
}

const ESCAPES: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;', "'": '&#39;' }

const text = (value: string): string => value.replace(/[&<>"']/g, (c) => ESCAPES[c])

const code = (value: string): string => (value === '' ? '' : `<code>${text(value)}</code>`)

const table = (heads: string[], rows: string[][]): string =>
  rows.length === 0
    ? ''
    : `<div class="scroll"><table><thead><tr>${heads.map((head) => `<th scope="col">${head}</th>`).join('')}</tr></thead>
<tbody>${rows.map((cells) => `<tr>${cells.map((cell) => `<td>${cell}</td>`).join('')}</tr>`).join('\n')}</tbody></table></div>`

function tagSection(api: ApiDescription, tag: { name: string; description?: string }): string {
  const operations = Object.entries(api.paths).flatMap(([path, methods]) =>
    Object.entries(methods)
      .filter(([method, { tags = [] }]) => method !== 'head' && tags.includes(tag.name))
      .map(([method, operation]) => operationSection(method, path, operation)),
  )
  return `<h2 id="tag-${text(tag.name)}">${text(tag.description ?? tag.name)}</h2>\n${operations.join('\n')}`
}

function operationSection(method: string, path: string, operation: Operation): string {
  const parameters = (operation.parameters ?? []).map((parameter) => {
    const [row] = fieldRows({ properties: { [parameter.name]: parameter.schema } })
    const meaning = parameter.description ?? row.meaning
    return [code(row.path), parameter.in, ...cells({ ...row, meaning, isRequired: parameter.required ?? false })]
  })
  return `<h3><code>${method.toUpperCase()} ${text(path)}</code></h3>
<p>${text(operation.summary ?? '')}. ${text(operation.description ?? '')}</p>
${parameters.length === 0 ? '' : `<h4>Parameters</h4>${table(['name', 'in', ...FIELD_HEADS], parameters)}`}
${bodySection(operation)}
<h4>Answers</h4>
${table(['status', 'what it says', 'content'], Object.entries(operation.responses).map(answerRow))}`
}

function bodySection({ requestBody }: Operation): string {
  if (requestBody === undefined) return ''
  const rows = Object.entries(requestBody.content).map(([type, { schema }]) => [code(type), contentOf(schema)])
  const fields = Object.values(requestBody.content).flatMap(({ schema }) => fieldRows(schema))
  return `<h4>Body</h4>${table(['type', 'content'], rows)}${fieldTable(fields)}`
}

const contentOf = (schema: JsonSchema): string => {
  const component = componentOf(schema)
  return component === undefined ? text(schema.description ?? schema.title ?? typeOf(schema)) : linkTo(component)
}

const answerRow = ([status, { description, content }]: [string, Answer]): string[] => [
  status,
  text(description),
  Object.entries(content ?? {})
    .map(([type, { schema }]) => `${code(type)} ${contentOf(schema)}`)
    .join('<br>'),
]

const linkTo = (component: string): string => `<a href="#schema-${text(component)}">${text(component)}</a>`

const FIELD_HEADS = ['type', 'meaning', 'range', 'default']

const cells = (row: FieldRow): string[] => [
  row.component === undefined ? text(row.type) : linkTo(row.component),
  text(row.meaning),
  text(row.range),
  row.isRequired ? 'required' : code(row.default),
]

const fieldTable = (rows: FieldRow[]): string =>
  table(
    ['field', ...FIELD_HEADS],
    rows.map((row) => [code(row.path), ...cells(row)]),
  )

function componentSection([name, schema]: [string, JsonSchema]): string {
  const examples = (schema.examples ?? []).map(
    (example) =>
      `<details><summary>Worked example</summary><pre>${text(JSON.stringify(example, null, 2))}</pre></details>`,
  )
  return `<h3 id="schema-${text(name)}">${text(name)}</h3>
<p>${text(schema.description ?? '')}</p>
${fieldTable(fieldRows(schema))}
${examples.join('\n')}`
}
