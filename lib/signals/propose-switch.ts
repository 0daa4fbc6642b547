import "server-only";
import { propose } from "../approvals/propose";
import type { ApprovalView } from "../approvals/schema";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict } from "../errors";
import { writeOnce } from "../write-once";
import { lockOwnSignals, ownOrThrow, refuseBadFormula, refuseWhileProposed } from "./own-rows";
import type { SwitchSignalInput } from "./own-schema";

/** Puts a switch before a second person; nothing changes until they approve. */
export async function proposeSwitch(ctx: Context, input: SwitchSignalInput): Promise<ApprovalView> {
  demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    const row = ownOrThrow(await lockOwnSignals(tx), input.id);
    const isOn = row.state === "on";
    if (isOn === (input.to === "on")) throw conflict(`This signal is ${isOn ? "on" : "not on"} already`);
    if (input.to === "on") refuseBadFormula(row.formula);
    await refuseWhileProposed(tx, input.id);
    return propose(ctx, tx, {
      kind: input.to === "on" ? "signal.switch_on" : "signal.switch_off",
      subject: { signalId: input.id },
      reason: input.reason,
    });
  });
}
