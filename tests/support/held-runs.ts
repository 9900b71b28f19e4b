import type { Handler } from '../../server/src/jobs/handler';
import { handlers } from '../../server/src/jobs/handlers/index';

let gate: { passes: number; readonly reached: () => void; readonly open: Promise<void> } | null = null;

async function pause(): Promise<void> {
  if (!gate || gate.passes-- > 0) return;
  gate.reached();
  await gate.open;
}

const heldWhereBegun = ['fit.path', 'binning.complete'];

/**
 * The worker's own handlers, of which some runs can be held while something happens under their hands: a fit and the completing of a binning where they have
 * begun, a reading where it has made its place, or once it has stored some segments. What is held does not end otherwise either.
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
      try {
        await handler.work(payload, {
          ...run,
          async write(work) {
            const written = await run.write(work);
            if (handler.definition.kind === 'sample.read') await pause();
            return written;
          },
        });
      } catch (cause) {
        await gate?.open;
        throw cause;
      }
    },
  })),

  /** Starts a run, does something else once it is held (a reading: after so many segments), and lets it go on. */
  async while(
    start: () => Promise<string>,
    happens: (runId: string) => Promise<unknown>,
    { segments = 0 }: { readonly segments?: number } = {},
  ): Promise<string> {
    let letGo = (): void => undefined;
    const held = new Promise<void>((reached) => {
      gate = { passes: segments, reached, open: new Promise((go) => (letGo = go)) };
    });
    try {
      const runId = await start();
      await held;
      await happens(runId);
      return runId;
    } finally {
      gate = null;
      letGo();
    }
  },
};
