import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { createEvaluator } from '../workers';
import { App } from './App';
import { takeDroppedFiles } from './files/dropFiles';
import { keepDrafts, restoreLast } from './files/keeping';
import { listenForInstall } from './install/installPrompt';
import { registerServiceWorker } from './install/serviceWorker';
import { startEvaluating } from './state/evaluating';
import { prefersStillness } from './state/looks';
import { stream } from './state/stream';
import { keepTastes, restoreTastes } from './state/tastes';
import '@fontsource-variable/public-sans/wght.css';
import './styles/base.css';
import './styles/layout.css';
import './styles/fields.css';
import './styles/sheet.css';
import './styles/ledger.css';
import './styles/ribbon.css';
import './styles/dialog.css';

restoreTastes(location.search);
keepTastes();
listenForInstall();

/** The first motion plays by itself, unless the user has asked for stillness. */
function playFirstMotion(): void {
  const stop = stream.onEvaluation(() => {
    if (stream.length === 0) return;
    stop();
    if (!prefersStillness()) stream.play();
  });
}

const root = document.getElementById('root');
if (!root) throw new Error('The page has no element with the id "root"');

await restoreLast();
keepDrafts();
takeDroppedFiles(document.documentElement);
playFirstMotion();
startEvaluating(createEvaluator());
createRoot(root).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
void registerServiceWorker();
