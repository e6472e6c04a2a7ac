import { render } from 'preact'
import './style/tokens.css'
import './style/ui.css'
import './style/ledger.css'
import './style/screens.css'
import { shareToken } from './links.ts'
import { followShare } from './share-state.ts'
import { tick } from './shown.ts'
import { SharePage } from './views/share-page.tsx'

const page = document.getElementById('page')
if (page !== null) render(<SharePage />, page)
tick()
followShare(shareToken(location.hash))
// Another link opened in the same tab changes only the fragment.
addEventListener('hashchange', () => location.reload())
