import type { LearningView } from "@/lib/learning/learning-schema";
import { countText } from "../ui/count";
import { Time } from "../ui/time";
import { labelsText } from "./figure-text";

/** Which labels the figures are over, and what is left out. */
export function WindowWords({ view: { window } }: { view: LearningView }) {
  const { from, to, labels, fraudulent, leftOut } = window;
  if (labels === 0) {
    return (
      <p className="mb-2">
        There is no label {from || to ? "in this window" : "yet"}. Once reviewers have decided cases, what
        each scorer had predicted stands here against what they found.
      </p>
    );
  }
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
