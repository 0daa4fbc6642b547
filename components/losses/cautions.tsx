import type { WeekView } from "@/lib/losses/schema";
import { countText } from "../ui/count";
import { Notice } from "../ui/notice";
import { Time } from "../ui/time";

/** How far the figures can be trusted yet, and what they leave out. */
export function Cautions({ view }: { view: WeekView }) {
  const { maturity, totals } = view;
  return (
    <>
      {maturity.state !== "mature" && (
        <Notice
          kind="caution"
          title={maturity.state === "running" ? "This week is still running" : "Not mature yet"}
          className="mb-5"
        >
          {view.by === "booking" ? (
            "More will be booked until it is over."
          ) : (
            <>
              Disputes and reports about these payments may arrive until{" "}
              <Time at={maturity.maturesAt} as="day" />, so the losses can still grow.
            </>
          )}
        </Notice>
      )}
      {totals.unpriced > 0 && (
        <Notice kind="caution" title="Some payments are in no amount" className="mb-5">
          {countText(totals.unpriced)} of {countText(totals.payments)} payments are in currencies without a
          rate.
        </Notice>
      )}
    </>
  );
}
