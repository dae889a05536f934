import { createRoot } from 'react-dom/client'
import './page/theme.css'
import './page/page.css'
import { Page } from './page/page.tsx'

const root = document.getElementById('page')
if (root) createRoot(root).render(<Page />)
