import { useSignal } from '@preact/signals'
import { useLayoutEffect, useRef } from 'preact/hooks'

/** The width that a chart's frame has to draw in, at least 240. [px] */
export function useWidth() {
  const width = useSignal(358)
  const frame = useRef<HTMLDivElement>(null)
  useLayoutEffect(() => {
    const element = frame.current
    if (element === null) return undefined
    const watch = new ResizeObserver(() => (width.value = Math.max(240, element.clientWidth)))
    watch.observe(element)
    return () => watch.disconnect()
  }, [])
  return { frame, width: width.value }
}
