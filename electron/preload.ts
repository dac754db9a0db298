/** Exposes the bridge to the page, and nothing else. */
import { contextBridge, ipcRenderer, webUtils } from 'electron';
import type { HostEvent } from '../src/bridge/host.ts';
import type { Request } from '../src/bridge/requests.ts';

contextBridge.exposeInMainWorld('beamdrape', {
  ask: (request: Request) => ipcRenderer.invoke('beamdrape:ask', request),
  dropped: (files: File[]) =>
    ipcRenderer.invoke(
      'beamdrape:dropped',
      // Older runtimes have the path on the file itself.
      files.map((f) => webUtils?.getPathForFile(f) ?? (f as File & { path?: string }).path ?? ''),
    ),
  listen: (hear: (event: HostEvent) => void) => {
    const on = (_: unknown, event: HostEvent) => hear(event);
    ipcRenderer.on('beamdrape:event', on);
    return () => ipcRenderer.off('beamdrape:event', on);
  },
});
