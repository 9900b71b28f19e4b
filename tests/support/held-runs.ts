import type { Handler } from '../../server/src/jobs/handler';
import { handlers } from '../../server/src/jobs/handlers/index';

let gate: { readonly reached: () => void; readonly open: Promise<void> } | null = null;

async function pause(): Promise<void> {
  gate?.reached();
  await gate?.open;
}

const heldWhereBegun = ['fit.path', 'binning.complete'];

/**
 * The worker's own handlers, of which some runs can be held while something happens under their hands: a fit and the completing of a binning where they have
 * begun, a reading where it has made its place and has stored nothing yet.
 *
 * @example
 * const server = await IntakeServer.start({ handlers: heldRuns.handlers });
 * const runId = await heldRuns.while(startFit, erase);
 */
export const heldRuns = {
  handlers: handlers.map((handler): Handler => ({
    ...handler,
    async work(payload, run) {
      if (heldWhereBegun.includes(handler.definition.kind)) await pause();
      await handler.work(payload, {
        ...run,
        async write(work) {
          const written = await run.write(work);
          if (handler.definition.kind === 'sample.read') await pause();
          return written;
        },
      });
    },
  })),

  /** Starts a run, does something else once it is held, and lets it go on. */
  async while(start: () => Promise<string>, happens: () => Promise<unknown>): Promise<string> {
    let letGo = (): void => undefined;
    const held = new Promise<void>((reached) => {
      gate = { reached, open: new Promise((go) => (letGo = go)) };
    });
    try {
      const runId = await start();
      await held;
      await happens();
      return runId;
    } finally {
      gate = null;
      letGo();
    }
  },
};
