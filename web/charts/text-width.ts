let pen: CanvasRenderingContext2D | null | undefined
const known = new Map<string, number>()

/** Width of a line of text in the page’s face. [px] */
export function textWidth(text: string, font: string): number {
  const key = `${font}|${text}`
  const found = known.get(key)
  if (found !== undefined) return found
  pen ??= document.createElement('canvas').getContext('2d')
  if (pen === null) return text.length * 8
  pen.font = `${font} ${getComputedStyle(document.body).fontFamily}`
  const width = pen.measureText(text).width
  known.set(key, width)
  return width
}
