import { readdirSync, readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'

const ENGINE = new URL('../../server/engine/', import.meta.url)
const files = readdirSync(ENGINE, { recursive: true, encoding: 'utf8' }).filter((name) => name.endsWith('.ts'))

/** Source without comments, and without what stands in quotes unless that is an import's path. */
function codeOf(name: string): string {
  return readFileSync(new URL(name, ENGINE), 'utf8')
    .replace(/\/\*[\s\S]*?\*\//g, '')
    .replace(/(^|\s)\/\/.*$/gm, '')
}

const importsOf = (code: string): string[] =>
  [...code.matchAll(/(?:\bfrom|\bimport)\s*\(?\s*(['"])([^'"]+)\1/g)].map((match) => match[2])

/** What would let the clock, chance, the machine or the world in. `new Date(ms)` is arithmetic, `new Date()` a clock. */
const FORBIDDEN = [
  /\bDate\s*\.\s*now\b/,
  /\bnew\s+Date\s*\(\s*\)/,
  /\bDate\s*\(\s*\)/,
  /\bMath\s*\.\s*random\b/,
  /\bconsole\b/,
  /\bprocess\b/,
  /\bfetch\b/,
  /\bset(?:Timeout|Interval|Immediate)\b/,
  /\bperformance\b/,
  /\bglobalThis\b/,
  /\brequire\s*\(/,
]

const offences = (code: string): string[] => FORBIDDEN.filter((word) => word.test(code)).map(String)

function leavesEngine(path: string, from: string): boolean {
  if (path === 'suncalc') return from !== 'sun.ts'
  return !path.startsWith('.') || !new URL(path, new URL(from, ENGINE)).href.startsWith(ENGINE.href)
}

describe('the engine is arithmetic only', () => {
  it('and all its files are looked at', () => {
    expect(files).toContain('sun.ts')
    expect(files.length).toBeGreaterThan(10)
  })

  it.each(files)('%s asks no clock, no chance, no machine', (name) => {
    expect(offences(codeOf(name))).toEqual([])
  })

  it.each(files)('%s imports nothing from outside the engine but suncalc', (name) => {
    expect(importsOf(codeOf(name)).filter((path) => leavesEngine(path, name))).toEqual([])
  })

  it('and the check would notice', () => {
    expect(offences('const now = Date.now()')).toHaveLength(1)
    expect(offences('new Date( ); Math.random(); setTimeout(f)')).toHaveLength(4)
    expect(importsOf("import fs from 'node:fs'\nexport { x } from '../store/x.ts'\nawait import('./a.ts')")).toEqual([
      'node:fs',
      '../store/x.ts',
      './a.ts',
    ])
    expect(leavesEngine('../store/x.ts', 'sky.ts')).toBe(true)
    expect(leavesEngine('./air.ts', 'sky.ts')).toBe(false)
    expect(leavesEngine('suncalc', 'sky.ts')).toBe(true)
  })
})
