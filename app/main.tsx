/** Mounts the page: theme and address first, so that nothing is shown or computed twice. */
import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { App } from './App.tsx';
import { openSession } from './run/session.ts';
import { openAddress } from './share/address.ts';
import { openShortcuts } from './shortcuts.ts';
import { openTheme } from './theme.ts';

openTheme();
openShortcuts();
await openAddress();
openSession();

const root = document.getElementById('root');
if (!root) throw new Error('The page has no place for the application.');
createRoot(root).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
