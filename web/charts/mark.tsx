/** Our mark: a balance that comes down to the double rule and rises again above it. */
export const Mark = () => (
  <svg class="mark" width="22" height="22" viewBox="0 0 22 22" aria-hidden="true">
    <path d="M1 16.5h20M1 20.5h20" stroke="var(--ink)" stroke-width="1.8" />
    <path
      d="M1.5 2.5 10 12l4.5-5.5 6 4"
      fill="none"
      stroke="var(--ink)"
      stroke-width="2.6"
      stroke-linejoin="round"
      stroke-linecap="round"
    />
  </svg>
)
