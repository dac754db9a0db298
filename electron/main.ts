/** Start of the desktop host: one instance, files by double click, then windows. */
import { existsSync } from 'node:fs';
import { resolve } from 'node:path';
import { app, BrowserWindow } from 'electron';
import { openBridge } from './bridge.ts';
import { openWindow, registerPages, servePages } from './windows.ts';

/** The project or part among the arguments, which also hold the program, its folder and Chromium's flags. */
function fileIn(argv: readonly string[], folder: string): string | null {
  const named = argv.slice(1).filter((a) => !a.startsWith('-') && /\.(stl|json)$/i.test(a));
  const last = named[named.length - 1];
  return last === undefined ? null : existsSync(resolve(folder, last)) ? resolve(folder, last) : null;
}

let early: string | null = null;

if (!app.requestSingleInstanceLock()) app.quit();
else {
  registerPages();
  app.on('second-instance', (_event, argv, folder) => openWindow(fileIn(argv, folder)));
  app.on('open-file', (event, path) => {
    event.preventDefault();
    if (app.isReady()) openWindow(path);
    else early = path;
  });
  app.on('window-all-closed', () => {
    if (process.platform !== 'darwin') app.quit();
  });
  app.on('activate', () => {
    if (BrowserWindow.getAllWindows().length === 0) openWindow(null);
  });
  void app.whenReady().then(() => {
    servePages();
    openBridge();
    openWindow(early ?? fileIn(process.argv, process.cwd()));
  });
}
