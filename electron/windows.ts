/** Windows: one a project, each with its desk; the app:// pages; what a page may never do. */
import { join } from 'node:path';
import { app, BrowserWindow, Menu, type MenuItemConstructorOptions, protocol, session } from 'electron';
import { createDesk } from '../src/bridge/host/desk.ts';
import { HEADERS, pageAt } from '../src/bridge/host/pages.ts';
import type { HostEvent } from '../src/bridge/host.ts';
import type { Request } from '../src/bridge/requests.ts';
import { leave, seat } from './bridge.ts';
import { rememberedSize, rememberSize, stateFolder, systemDialogs } from './files.ts';

/** Before the app is ready. */
export function registerPages(): void {
  protocol.registerSchemesAsPrivileged([
    {
      scheme: 'app',
      privileges: { standard: true, secure: true, supportFetchAPI: true, stream: true, codeCache: true },
    },
  ]);
}

export function servePages(): void {
  const root = join(__dirname, '../renderer');
  protocol.handle('app', async (request) => {
    const url = new URL(request.url);
    if (url.host !== 'main' || request.method !== 'GET')
      return new Response(null, { status: 403, headers: HEADERS });
    const page = await pageAt(root, url.pathname);
    return new Response(page.body, { status: page.status, headers: page.headers });
  });
  session.defaultSession.setPermissionRequestHandler((_contents, _permission, done) => done(false));
  session.defaultSession.setPermissionCheckHandler(() => false);
  app.on('web-contents-created', (_event, contents) => {
    contents.on('will-navigate', (event) => event.preventDefault());
    contents.on('will-attach-webview', (event) => event.preventDefault());
    contents.setWindowOpenHandler(() => ({ action: 'deny' }));
  });
}

export function openWindow(file: string | null): void {
  const window = new BrowserWindow({
    ...rememberedSize(),
    minWidth: 760,
    minHeight: 520,
    show: false,
    title: 'Beamdrape',
    icon: join(__dirname, '../renderer/beamdrape.png'),
    webPreferences: {
      preload: join(__dirname, '../preload/preload.cjs'),
      contextIsolation: true,
      sandbox: true,
      nodeIntegration: false,
      spellcheck: false,
    },
  });
  const id = window.webContents.id;
  let unsaved = false;
  let closing = false;
  let gone = false;
  const tell = (event: HostEvent) => window.webContents.send('beamdrape:event', event);
  seat(
    id,
    createDesk(
      stateFolder(),
      systemDialogs(window),
      {
        title(name, now) {
          unsaved = now;
          window.setTitle(`${now ? '• ' : ''}${name} – Beamdrape`);
          window.setDocumentEdited(now);
        },
        menu: (menus) => showMenu(menus, tell),
        close() {
          closing = true;
          window.close();
        },
      },
      file,
    ),
  );
  window.once('ready-to-show', () => window.show());
  window.on('close', (event) => {
    const { width, height } = window.getNormalBounds();
    rememberSize({ width, height });
    if (closing || gone || !unsaved) return;
    event.preventDefault();
    tell({ kind: 'close-asked' });
  });
  window.webContents.on('render-process-gone', () => {
    gone = true;
  });
  window.on('page-title-updated', (event) => event.preventDefault());
  window.on('closed', () => leave(id));
  void window.loadURL('app://main/index.html');
}

/** The page keeps the list of commands and hears the keys itself; here they are only shown. */
function showMenu(menus: Extract<Request, { ask: 'menu' }>['menus'], tell: (event: HostEvent) => void): void {
  const template: MenuItemConstructorOptions[] = menus.map((m) => ({
    label: m.label,
    submenu: m.entries.map(
      (e): MenuItemConstructorOptions =>
        e === 'line'
          ? { type: 'separator' }
          : {
              id: e.id,
              label: e.label,
              enabled: e.enabled,
              ...(e.keys
                ? { accelerator: e.keys.replace('Mod', 'CommandOrControl'), registerAccelerator: false }
                : {}),
              click: () => tell({ kind: 'command', id: e.id }),
            },
    ),
  }));
  if (process.platform === 'darwin') template.unshift({ role: 'appMenu' });
  Menu.setApplicationMenu(Menu.buildFromTemplate(template));
}
