/** Where this host keeps its things, and the system's own dialogs. Reading and saving: src/bridge/host/files.ts. */
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { app, type BrowserWindow, dialog } from 'electron';
import type { Dialogs } from '../src/bridge/host/desk.ts';

export const stateFolder = (): string => join(app.getPath('userData'), 'work');

export function systemDialogs(window: BrowserWindow): Dialogs {
  return {
    async open(what) {
      const documents = { name: 'Parts and projects', extensions: ['stl', 'drape.json', 'json'] };
      const drawings = {
        name: 'Drawings',
        extensions: [
          'svg',
          'dxf',
          'gbr',
          'ger',
          'gtl',
          'gbl',
          'gts',
          'gbs',
          'gto',
          'gko',
          'drl',
          'xln',
          'exc',
        ],
      };
      const chosen = await dialog.showOpenDialog(window, {
        properties: ['openFile'],
        filters: [
          ...(what === 'drawing' ? [drawings, documents] : [documents, drawings]),
          { name: 'All files', extensions: ['*'] },
        ],
      });
      return chosen.canceled ? null : (chosen.filePaths[0] ?? null);
    },
    async place(suggested) {
      const chosen = await dialog.showSaveDialog(window, {
        defaultPath: suggested,
        filters: [{ name: 'Beamdrape project', extensions: ['drape.json', 'json'] }],
      });
      return chosen.canceled ? null : (chosen.filePath ?? null);
    },
    async folder() {
      const chosen = await dialog.showOpenDialog(window, {
        title: 'Folder for the scan files',
        properties: ['openDirectory', 'createDirectory'],
      });
      return chosen.canceled ? null : (chosen.filePaths[0] ?? null);
    },
    list: async () => [],
  };
}

export interface Size {
  width: number;
  height: number;
}

const sizeFile = (): string => join(app.getPath('userData'), 'size.json');

export function rememberedSize(): Size {
  try {
    const s = JSON.parse(readFileSync(sizeFile(), 'utf8')) as Partial<Size>;
    if (Number(s.width) >= 640 && Number(s.height) >= 480)
      return { width: Number(s.width), height: Number(s.height) };
  } catch {
    // No size yet, or one that cannot be read: the first size serves.
  }
  return { width: 1280, height: 860 };
}

export function rememberSize(size: Size): void {
  try {
    writeFileSync(sizeFile(), JSON.stringify(size));
  } catch {
    // A size that cannot be kept is no reason to keep a window open.
  }
}
