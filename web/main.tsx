import { render } from 'preact'
import './style/tokens.css'
import './style/ui.css'
import './style/ledger.css'
import './style/screens.css'
import './style/set-up.css'
import { start } from './state.ts'
import { wearTheme } from './theme.ts'
import { App } from './views/app.tsx'

wearTheme()
start()
const page = document.getElementById('page')
if (page !== null) render(<App />, page)
