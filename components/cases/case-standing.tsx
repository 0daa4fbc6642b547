import type { CaseView } from "@/lib/cases/schema";
import { Time } from "../ui/time";
import { CASE_STATE_WORDS } from "../words";

/** Where the case stands, and with whom. */
export function CaseStanding({ view }: { view: CaseView }) {
  return (
    <p className="mb-4 flex flex-wrap gap-x-5 gap-y-1">
      <span>
        <span className="text-soft">State</span>{" "}
        <strong className="font-strong">{CASE_STATE_WORDS[view.state]}</strong>
        {view.state === "waiting" && view.waitUntil && (
          <>
            {" "}
            until <Time at={view.waitUntil} />
          </>
        )}
      </span>
      {view.claimedBy && (
        <span>
          <span className="text-soft">In hand of</span> {view.claimedBy.name}
          {view.claimExpiresAt && (
            <>
              {" "}
              until <Time at={view.claimExpiresAt} as="clock" />
            </>
          )}
        </span>
      )}
      <span>
        <span className="text-soft">Assigned to</span> {view.assignedTo?.name ?? "nobody"}
      </span>
      <span>
        <span className="text-soft">Opened</span> <Time at={view.openedAt} />
      </span>
      <span>
        <span className="text-soft">Due</span> <Time at={view.dueAt} />
      </span>
    </p>
  );
}
