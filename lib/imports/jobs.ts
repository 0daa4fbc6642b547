import "server-only";
import type { Job } from "../job";
import { abandonSilentUploads } from "./abandon";
import { claimImport, LostLease } from "./lease";
import { runImport } from "./run";

/** The row's lease says who reads an import. */
export const importJobs: readonly Job[] = [
  {
    name: "imports",
    everyMs: 1_000,
    slot: null,
    run: async (ctx, signal) => {
      await abandonSilentUploads(ctx.db, ctx.now());
      for (;;) {
        const claimed = signal.aborted ? null : await claimImport(ctx.db, ctx.now());
        if (!claimed) return;
        try {
          await runImport(ctx, claimed, signal);
        } catch (error) {
          // Taken over by another server, which goes on behind the last batch that was committed.
          if (!(error instanceof LostLease)) throw error;
        }
      }
    },
  },
];
