/** Keeps copper, reach and plan abreast of the document: one revision at a time, the newest always next. */
import type { StoreApi } from 'zustand/vanilla';
import { type WorkerClient, wasStopped } from '../worker/client.ts';
import type { State } from './state.ts';

export interface Follower {
  /** The document changed. */
  wake(): void;
  /** Takes up what the person stopped. */
  again(): void;
  /** Settles when everything shown belongs to the document as it is. */
  settled(): Promise<void>;
}

/** Time after which the copper laid so far is shown, ms; each further wait is twice as long. */
const FIRST_LOOK = 500;

export function createFollower(
  api: StoreApi<State>,
  worker: WorkerClient,
  fail: (error: unknown, doing: string) => void,
): Follower {
  let running: Promise<void> | null = null;
  let beyondDrape = false;
  /** Revision that was followed to its end, well or not. */
  let followed = -1;
  let handed: State['drawings'] | null = null;

  /** Number of the look at the nets that runs, 0 for none. */
  let measuring = 0;
  let measures = 0;

  const late = (revision: number) => api.getState().revision !== revision;

  async function follow(): Promise<void> {
    for (;;) {
      const { revision, project, part } = api.getState();
      if (revision === followed) return;
      followed = revision;
      if (!project || !part) {
        api.setState({ copper: null, reach: null, plan: null, rules: null, connections: null, nets: null });
        continue;
      }
      const since = performance.now();
      let whole = false;
      const tell = (what: string) => (p: { done: number; of: number } | null) =>
        api.setState({ busy: { what, since, share: p && p.of > 0 ? p.done / p.of : null } });
      try {
        const drape = tell('Laying the copper');
        drape(null);
        const { drawings } = api.getState();
        if (drawings !== handed) {
          await worker.call('holdDrawings', { files: filesOf(drawings) });
          handed = drawings;
        }
        // Copper is shown as it is laid; reach and plan wait for all of it.
        for (let patience = FIRST_LOOK; ; patience *= 2) {
          const copper = await worker.call('drape', { project, patience }, drape);
          if (late(revision)) break;
          api.setState({
            copper: { revision, value: copper },
            ...(copper.pending === 0 ? { preview: [] } : {}),
          });
          if (copper.pending === 0) break;
        }
        if (late(revision)) continue;
        whole = true;
        beyondDrape = true;
        const look = tell('Looking where the beam reaches');
        look(null);
        const reach = await worker.call('reach', null, look);
        if (late(revision)) continue;
        api.setState({ reach: { revision, value: reach } });
        const layers = tell('Planning the layers');
        layers(null);
        const plan = await worker.call('plan', null, layers);
        if (late(revision)) continue;
        api.setState({ plan: { revision, value: plan } });
      } catch (error) {
        api.setState({ preview: [] });
        if (!wasStopped(error)) fail(error, 'Working out the copper');
      } finally {
        beyondDrape = false;
        api.setState((s) => (s.busy?.since === since ? { busy: null } : s));
      }
      if (whole && !late(revision)) void measure(revision);
    }
  }

  /** Shop rules and nets come last: nothing waits for them, and a change of the document stops them. */
  async function measure(revision: number): Promise<void> {
    const mine = ++measures;
    measuring = mine;
    try {
      const rules = await worker.call('rules', null);
      if (late(revision)) return;
      api.setState({ rules: { revision, value: rules } });
      const connections = await worker.call('connections', null);
      if (late(revision)) return;
      api.setState({ connections: { revision, value: connections } });
      const nets = await worker.call('nets', null);
      if (!late(revision)) api.setState({ nets: { revision, value: nets } });
    } catch (error) {
      if (late(revision)) return;
      api.setState({ nets: { revision, value: null } });
      if (!wasStopped(error)) fail(error, 'Working out rules and nets');
    } finally {
      if (measuring === mine) measuring = 0;
    }
  }

  const wake = () => {
    // Work for the document as it is goes on.
    if (late(followed)) {
      if (beyondDrape || measuring > 0) worker.stopAll();
      measuring = 0;
    }
    running ??= follow().finally(() => {
      running = null;
    });
  };
  return {
    wake,
    again() {
      followed = -1;
      wake();
    },
    settled: async () => {
      while (running) await running;
    },
  };
}

export const filesOf = (drawings: State['drawings']): { file: string; bytes: Uint8Array }[] =>
  Object.entries(drawings).map(([file, { bytes }]) => ({ file, bytes }));
