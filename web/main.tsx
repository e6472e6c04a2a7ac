import { render } from 'preact'
import './style/tokens.css'
import './style/ui.css'
import './style/ledger.css'
import './style/screens.css'
import './style/set-up.css'
import './style/crew.css'
import { ownerToken } from './links.ts'
import { signIn, standing } from './session.ts'
import { start } from './state.ts'
import { wearTheme } from './theme.ts'
import { App } from './views/app.tsx'

wearTheme()
const page = document.getElementById('page')
// A link opened in a tab that is already here changes only the fragment.
addEventListener('hashchange', () => ownerToken(location.hash) !== null && location.reload())
await signIn()
if (standing.value === null || standing.value === 'inside') start()
if (page !== null) render(<App />, page)
