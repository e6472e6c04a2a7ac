import { Mark } from '../charts/mark.tsx'
import type { Standing } from '../links.ts'

const SAYS: Record<Exclude<Standing, 'inside' | null>, string> = {
  outside: 'This service opens with its owner’s link.',
  spent: 'This link is not valid any more.',
  'no-contact': 'The service did not answer, so the link was not tried.',
}

/** What somebody without a link sees: how to get one. */
export const Landing = ({ standing }: { standing: Exclude<Standing, 'inside' | null> }) => (
  <>
    <header class="top">
      <Mark />
      <span class="where">Stagewatt</span>
    </header>
    <main class="phone pad" id="main">
      <h1 class="say">{SAYS[standing]}</h1>
      {standing === 'no-contact' ? (
        <button type="button" class="btn" onClick={() => location.reload()}>
          Try again
        </button>
      ) : (
        <>
          <p>
            The link was printed by the first start, as <b>Owner’s link</b>. Open it once in this browser; it then stays
            signed in.
          </p>
          <p class="gap">
            Lost it? On the machine that runs the service, <code>npm run owner-link</code> makes a new one and ends the
            old one.
          </p>
          <p class="gap">To look at one day’s budget only, ask the crew for a share link of that day.</p>
        </>
      )}
    </main>
  </>
)
