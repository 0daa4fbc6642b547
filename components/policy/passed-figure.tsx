import Link from "next/link";
import type { PassedView } from "@/lib/learning/passed-schema";
import { countText } from "../ui/count";
import { Figure } from "../ui/figure";

const WHY_NOT: Readonly<Record<NonNullable<PassedView["reason"]>, string>> = {
  nothing_passed: "no payment has passed in four weeks",
  nothing_drawn: "no passed payment has been drawn yet",
  nothing_decided: "none of those drawn is decided yet",
};

/** What the review line lets through, as far as the random sample of it can tell. */
export function PassedFigure({ passed: { estimate, reason, decided } }: { passed: PassedView }) {
  return (
    <Figure
      label="Fraud below the review line"
      value={estimate ? rate(estimate.perThousand.value) : "–"}
      unit={estimate ? `in ${countText(1000)}` : undefined}
      note={
        estimate ? (
          <>
            95 % interval {rate(estimate.perThousand.low)} to {rate(estimate.perThousand.high)}, from{" "}
            <Link href="/learning" className="underline decoration-edge underline-offset-4">
              {decided === 1 ? "1 draw" : `${countText(decided)} draws`}
            </Link>{" "}
            of four weeks
          </>
        ) : (
          reason && WHY_NOT[reason]
        )
      }
    />
  );
}

const rate = (perThousand: number): string => perThousand.toFixed(perThousand < 10 ? 2 : 1);
