import type { LearningView } from "@/lib/learning/learning-schema";
import { countText } from "../ui/count";
import { Time } from "../ui/time";
import { labelsText } from "./figure-text";

/** Which labels the figures are over, and what is left out. */
export function WindowWords({ view: { window } }: { view: LearningView }) {
  const { from, to, labels, fraudulent, leftOut } = window;
  return (
    <p className="mb-2 text-small text-soft">
      {labelsText(labels)}, {countText(fraudulent)} of them fraudulent
      {from && (
        <>
          {"; "}from <Time at={from} />
        </>
      )}
      {to && (
        <>
          {from ? " " : "; "}until <Time at={to} />
        </>
      )}
      .{leftOut > 0 && ` The newest are judged; ${countText(leftOut)} older ones are left out.`}
    </p>
  );
}
