/** The way from the command line into the window: the host lives in src/bridge/host. */
import { startWindow } from '../bridge/host/start.ts';

/** @returns exit status, when the window is closed */
export const openWindow = (args: readonly string[]): Promise<number> => startWindow(args);
