/** Start of the page. */
import { createRoot } from 'react-dom/client';
import { browserHost } from '../bridge/web/browser.ts';
import { desktopHost, type Preload } from '../bridge/web/desktop.ts';
import { createStore } from '../store/store.ts';
import { type Port, workerClient } from '../worker/client.ts';
import { App, createQuestions } from './app.tsx';
import './style.css';

const worker = () =>
  workerClient(
    new Worker(new URL('../worker/web.ts', import.meta.url), { type: 'module' }) as unknown as Port,
  );

const questions = createQuestions();
const preload = (window as { beamdrape?: Preload }).beamdrape;
const host = preload
  ? desktopHost(preload)
  : browserHost({
      async file(names) {
        const text =
          names.length > 0
            ? 'These lie in the folder that the program was started in. Others can be dropped on the window.'
            : 'There is no part or project in the folder that the program was started in. Drop a file on the window instead.';
        return (await questions.ask({ title: 'Open', text, answers: [], choices: names })).answer;
      },
      async name(suggested) {
        const { answer, entry } = await questions.ask({
          title: 'Save as',
          text: 'Saved in the folder that the program was started in.',
          answers: [['save', 'Save']],
          entry: { label: 'File name', value: suggested },
        });
        return answer === 'save' && entry.trim() ? entry.trim() : null;
      },
    });
const store = createStore({ heavy: worker(), live: worker() });
createRoot(document.getElementById('window')!).render(
  <App store={store} host={host} questions={questions} />,
);
