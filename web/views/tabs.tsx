interface TabsProps {
  label: string
  chosen: string
  items: { id: string; text: string }[]
  onChoose: (id: string) => void
}

/** A row of choices that scrolls sideways in place where there are many. */
export function Tabs({ label, chosen, items, onChoose }: TabsProps) {
  if (items.length < 2) return null
  return (
    <div class="days" role="group" aria-label={label}>
      {items.map(({ id, text }) => (
        <button type="button" key={id} aria-pressed={id === chosen} onClick={() => onChoose(id)}>
          {text}
        </button>
      ))}
    </div>
  )
}
