/** What was assumed, and what comes before any figure here. */
export const Assumptions = ({ items }: { items: string[] }) => (
  <section class="sec pad" aria-labelledby="assumed-title">
    <div class="sech">
      <h2 id="assumed-title">Assumed</h2>
    </div>
    {items.length > 0 && (
      <ul class="plain">
        {items.map((item) => (
          <li key={item}>{item}</li>
        ))}
      </ul>
    )}
    <p class="note caution">
      Forecasts are estimates. Posted limits, the event’s rules and the battery management system come first; drivers’
      heat limits outrank the plan. No one types while driving.
    </p>
  </section>
)
