import '@fontsource/alegreya/latin-400.css';
import '@fontsource/alegreya/latin-400-italic.css';
import '@fontsource/alegreya/latin-500.css';
import '@fontsource/alegreya/latin-ext-400.css';
import '@fontsource/alegreya/latin-ext-500.css';
import '@fontsource/instrument-sans/latin-400.css';
import '@fontsource/instrument-sans/latin-500.css';
import '@fontsource/instrument-sans/latin-ext-400.css';
import '@fontsource/instrument-sans/latin-ext-500.css';
import './styles/page.css';
import './styles/easel.css';
import './styles/section.css';
import './styles/panel.css';
import './styles/controls.css';
import './styles/sheets.css';
import './styles/presets.css';
import './styles/states.css';
import { createRoot } from 'react-dom/client';
import { startEaselWork } from './app/easelWork.ts';
import { takeHostEvent } from './app/hostEvents.ts';
import { startTellingWork } from './app/memoryWork.ts';
import { openPhoto, refreshSession } from './app/photoWork.ts';
import { listenToHost } from './host/listenToHost.ts';
import { App } from './shell/App.tsx';
import { startKeys } from './shell/keyCommands.ts';
import { sessionStore } from './state/photoStore.ts';

startEaselWork();
startTellingWork();
startKeys();
createRoot(document.getElementById('root')!).render(<App />);

void listenToHost(takeHostEvent, new AbortController().signal);
void refreshSession().then(() => {
  const opening = sessionStore.get()?.opening;
  if (opening?.kind === 'photo') void openPhoto(opening.path);
});
