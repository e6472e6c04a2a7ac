import { Ajv2020, type ValidateFunction } from 'ajv/dist/2020.js'

interface Operation {
  responses: Record<string, { content?: Record<string, { schema: object }> }>
}

interface Description {
  paths: Record<string, Record<string, Operation>>
  components: { schemas: Record<string, object> }
}

/** Tells whether an answer is one that the API's description promises. */
export function describedAnswers(openapi: string) {
  const description: Description = JSON.parse(openapi)
  const ajv = new Ajv2020({ strict: false, validateFormats: false, allErrors: true })
  ajv.addSchema({ $id: 'api', components: description.components })
  const compiled = new Map<string, ValidateFunction>()
  const validator = (key: string, schema: object): ValidateFunction => {
    const made = compiled.get(key) ?? ajv.compile(JSON.parse(JSON.stringify(schema).replaceAll('"#/', '"api#/')))
    compiled.set(key, made)
    return made
  }

  /** What is wrong with an answer by the description; null where nothing is. */
  return function wrongAnswer(method: string, url: string, status: number, type: string, body: string): string | null {
    const path = Object.keys(description.paths).find((known) => matches(known, url))
    const operation = path === undefined ? undefined : description.paths[path][method.toLowerCase()]
    if (operation === undefined) return null
    const answer = operation.responses[String(status)]
    if (answer === undefined) return `${method} ${path} answered ${status}, which is not described: ${body}`
    if (answer.content === undefined) return body === '' ? null : `${method} ${path} ${status} has a body: ${body}`
    const media = Object.keys(answer.content).find((known) => type.startsWith(known))
    if (media === undefined) return `${method} ${path} ${status} is ${type}, which is not described`
    const validate = validator(`${method} ${path} ${status} ${media}`, answer.content[media].schema)
    return validate(JSON.parse(body)) ? null : `${method} ${path} ${status}: ${ajv.errorsText(validate.errors)}`
  }
}

const matches = (path: string, url: string): boolean =>
  new RegExp(`^${path.replaceAll(/\{\w+\}/g, '[^/]+')}$`).test(url.split('?')[0])
