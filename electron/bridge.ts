/** Every request from a page: is the sender ours, then the window's own desk. */
import { type IpcMainInvokeEvent, ipcMain } from 'electron';
import type { Desk } from '../src/bridge/host/desk.ts';
import { HostError } from '../src/bridge/host.ts';
import type { Reply } from '../src/bridge/requests.ts';

const desks = new Map<number, Desk>();

export const seat = (webContentsId: number, desk: Desk): void => void desks.set(webContentsId, desk);
export const leave = (webContentsId: number): void => void desks.delete(webContentsId);

const REFUSED: Reply = {
  ok: false,
  problem: 'the request does not come from the window',
  mend: 'nothing was done',
};

/** In Node the origin of an app: address is 'null', so the address itself is compared. */
function deskOf(event: IpcMainInvokeEvent): Desk | undefined {
  const frame = event.senderFrame;
  if (!frame || frame !== event.sender.mainFrame || !frame.url.startsWith('app://main/')) return undefined;
  return desks.get(event.sender.id);
}

export function openBridge(): void {
  ipcMain.handle(
    'beamdrape:ask',
    (event, raw: unknown): Promise<Reply> | Reply => deskOf(event)?.answer(raw) ?? REFUSED,
  );
  ipcMain.handle('beamdrape:dropped', async (event, raw: unknown): Promise<Reply> => {
    const desk = deskOf(event);
    if (!desk || !Array.isArray(raw)) return REFUSED;
    const paths = raw.filter((p): p is string => typeof p === 'string' && p !== '');
    try {
      return { ok: true, value: await desk.openPaths(paths) };
    } catch (error) {
      const news =
        error instanceof HostError
          ? error.news
          : { problem: (error as Error).message, mend: 'drop another file' };
      return { ok: false, ...news };
    }
  });
}
