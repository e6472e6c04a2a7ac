import { correction, generate } from 'lean-qr/nano'
import { useMemo } from 'preact/hooks'

/** Sides of a code on the screen, at most: whole pixels for every module read best. [px] */
const MOST_PX = 270

/** Light modules around a code. ISO/IEC 18004 */
const QUIET = 4

/** A text as a QR code: dark on light in either theme, since readers want it so. */
export function Qr({ text, label }: { text: string; label: string }) {
  const { path, size } = useMemo(() => codeOf(text), [text])
  const px = size * Math.max(2, Math.floor(MOST_PX / size))
  return (
    <svg
      class="qr"
      width={px}
      height={px}
      viewBox={`0 0 ${size} ${size}`}
      role="img"
      aria-label={label}
      shape-rendering="crispEdges"
    >
      <rect width={size} height={size} fill="#fff" />
      <path d={path} fill="#000" />
    </svg>
  )
}

function codeOf(text: string): { path: string; size: number } {
  const code = generate(text, { minCorrectionLevel: correction.M })
  let path = ''
  for (let y = 0; y < code.size; y++)
    for (let x = 0; x < code.size; x++) if (code.get(x, y)) path += `M${x + QUIET} ${y + QUIET}h1v1h-1z`
  return { path, size: code.size + 2 * QUIET }
}
