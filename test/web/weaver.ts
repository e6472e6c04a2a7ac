import { readFileSync } from 'node:fs'
import { type CarDocument, carDocument } from '../../server/documents/car.ts'

/** The demo car. */
export const weaver = (): CarDocument =>
  carDocument.parse(JSON.parse(readFileSync(new URL('../../server/demo/weaver-2.json', import.meta.url), 'utf8')))
