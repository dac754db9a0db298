/** Puts store, view, panels and bridge together. */
import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import type { Host, RecentFile } from '../bridge/host.ts';
import { QuestionDialog } from '../panels/dialogs.tsx';
import { Facts } from '../panels/facts.tsx';
import { FlatDrawing } from '../panels/flat-drawing.tsx';
import { Journey } from '../panels/journey.tsx';
import { Legend } from '../panels/legend.tsx';
import { MenuBar } from '../panels/menu-bar.tsx';
import { BusyLine, Hints, Notices } from '../panels/notices.tsx';
import type { Question } from '../panels/question.ts';
import { HeightStrip } from '../panels/strip.tsx';
import { ToolHelp, Tools } from '../panels/tools.tsx';
import { useSteady, WindowContext, type WindowTools } from '../panels/window.tsx';
import { isUnsaved } from '../store/state.ts';
import type { Store } from '../store/store.ts';
import { createViewport, type Viewport } from '../view/viewport.ts';
import { type Command, commandFor, commandList, menusOf, recentCommands } from './commands.ts';
import { type Ask, createDocuments } from './documents.ts';

interface Asked {
  question: Question;
  done(answer: { answer: string | null; entry: string }): void;
}

export interface Questions {
  ask: Ask;
  listen(hear: (asked: Asked[]) => void): () => void;
  answered(): void;
}

/** Questions wait in line: one dialog at a time. */
export function createQuestions(): Questions {
  let line: Asked[] = [];
  const listeners = new Set<(asked: Asked[]) => void>();
  const tell = () => {
    for (const hear of listeners) hear(line);
  };
  return {
    ask: (question) =>
      new Promise((done) => {
        line = [...line, { question, done }];
        tell();
      }),
    listen(hear) {
      listeners.add(hear);
      hear(line);
      return () => listeners.delete(hear);
    },
    answered() {
      line = line.slice(1);
      tell();
    },
  };
}

export function App({ store, host, questions }: { store: Store; host: Host; questions: Questions }) {
  const view = useRef<Viewport | null>(null);
  const [dismissed, setDismissed] = useState<ReadonlySet<string> | null>(null);
  const [asked, setAsked] = useState<Asked[]>([]);
  const documents = useMemo(
    () => createDocuments(store, host, questions.ask, (at) => view.current?.rays(at) ?? []),
    [store, host, questions],
  );
  const [recent, setRecent] = useState<readonly RecentFile[]>([]);
  useEffect(() => documents.onRecent(setRecent), [documents]);
  const commands = useMemo(
    () => [...commandList(store, documents, () => view.current), ...recentCommands(recent, documents)],
    [store, documents, recent],
  );
  const run = useCallback(
    (id: string) => {
      const command = commands.find((c) => c.id === id);
      if (command && (command.enabled?.(store.getState()) ?? true)) void command.run();
    },
    [commands, store],
  );

  useEffect(() => questions.listen(setAsked), [questions]);
  useEffect(() => void documents.begin((put) => setDismissed(new Set(put))), [documents]);
  useEffect(() => {
    return host.listen((event) => (event.kind === 'command' ? run(event.id) : documents.hear(event)));
  }, [documents, host, run]);

  useEffect(() => {
    const onKey = (e: KeyboardEvent) => {
      if (document.querySelector('dialog[open]')) return;
      const { tool } = store.getState();
      const typing = (e.target as HTMLElement).matches?.('input:not([type=checkbox]), select, textarea');
      if (!typing && e.key === 'Escape') store.drop();
      else if (
        !typing &&
        e.key === 'Enter' &&
        tool.kind === 'trace' &&
        !(e.target as HTMLElement).matches('button, summary, [role=slider]')
      )
        store.finish();
      else if (!typing && e.key === 'Backspace') {
        if (tool.kind === 'trace') store.takeBack();
        else run('delete');
      } else {
        const command = commandFor(e, commands);
        if (!command) return;
        if (command.enabled?.(store.getState()) ?? true) void command.run();
      }
      e.preventDefault();
    };
    addEventListener('keydown', onKey);
    return () => removeEventListener('keydown', onKey);
  }, [commands, run, store]);

  useEffect(() => {
    const over = (e: DragEvent) => e.preventDefault();
    const drop = (e: DragEvent) => {
      e.preventDefault();
      const files = [...(e.dataTransfer?.files ?? [])];
      if (files.length > 0) void documents.openDropped(files, { x: e.clientX, y: e.clientY });
    };
    addEventListener('dragover', over);
    addEventListener('drop', drop);
    return () => {
      removeEventListener('dragover', over);
      removeEventListener('drop', drop);
    };
  }, [documents]);

  const tools: WindowTools = useMemo(
    () => ({
      store,
      run,
      showPlace: (point, normal) => view.current?.showPlace(point, normal),
      reveal: (ids) => view.current?.reveal(ids),
      dismissed: dismissed ?? new Set(['hint-offset', 'hint-trace', 'hint-files']),
      dismiss(what) {
        setDismissed((d) => new Set([...(d ?? []), what]));
        void host.dismiss(what);
      },
    }),
    [store, run, host, dismissed],
  );
  const first = asked[0];
  return (
    <WindowContext.Provider value={tools}>
      <Frame host={host} commands={commands} />
      <main>
        <Journey />
        <div className="middle">
          <div className="stage">
            <ViewportBox store={store} onView={(v) => (view.current = v)} />
            <Tools />
            <Legend />
            <ToolHelp />
            <BusyLine />
            <Hints />
            <Notices />
          </div>
          <FlatDrawing />
        </div>
        <Facts />
        <HeightStrip />
      </main>
      {first && (
        <QuestionDialog
          key={first.question.title + first.question.text}
          question={first.question}
          onAnswer={(answer, entry) => {
            questions.answered();
            first.done({ answer, entry });
          }}
        />
      )}
    </WindowContext.Provider>
  );
}

/** Title, menus and unsaved state, inside the window or in the host's own frame. */
function Frame({ host, commands }: { host: Host; commands: readonly Command[] }) {
  const state = useSteady();
  const unsaved = isUnsaved(state);
  const name = state.project ? state.origin.name || state.project.name : 'Beamdrape';
  useEffect(() => host.title(name, unsaved), [host, name, unsaved]);
  const menus = menusOf(commands, state);
  const told = JSON.stringify(menus);
  // The text stands for the menus: the host hears of them only when something in them changed.
  useEffect(() => host.menu(JSON.parse(told)), [host, told]);
  return host.kind === 'browser' ? (
    <MenuBar menus={menus} title={`${unsaved ? '• ' : ''}${name}`} />
  ) : (
    <header className="sr">
      <h1>{name}</h1>
    </header>
  );
}

function ViewportBox({ store, onView }: { store: Store; onView(v: Viewport | null): void }) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const overlay = useRef<HTMLDivElement>(null);
  const [trouble, setTrouble] = useState('');
  // biome-ignore lint/correctness/useExhaustiveDependencies: made once for the life of the window
  useEffect(() => {
    try {
      const v = createViewport(canvas.current!, overlay.current!, store);
      onView(v);
      return () => {
        onView(null);
        v.dispose();
      };
    } catch (error) {
      setTrouble((error as Error).message);
    }
  }, [store]);
  return (
    <div className="viewport">
      {/* biome-ignore lint/a11y/noInteractiveElementToNoninteractiveRole: it hears arrows and letters by itself, as an application does */}
      <canvas
        ref={canvas}
        tabIndex={0}
        role="application"
        aria-label="The part on the bench. Arrows turn the view, plus and minus zoom; with a tool, arrows move a cross and Space places."
        data-testid="view"
      />
      <div className="overlay" ref={overlay} aria-hidden="true" data-testid="overlay" />
      {trouble && (
        <p className="wrong no-view">The picture cannot be drawn here: {trouble}. Everything else works.</p>
      )}
    </div>
  );
}
