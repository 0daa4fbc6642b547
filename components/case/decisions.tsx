import Link from "next/link";
import type { CaseView } from "@/lib/cases/schema";
import { Time } from "../ui/time";
import { CONFIDENCE_WORDS, DECISION_KIND_WORDS, TYPOLOGY_WORDS, VERDICT_WORDS } from "../words";

type DecisionsProps = {
  decisions: CaseView["decisions"];
  /** Each with a link to the record of what was shown with it. */
  linked?: boolean;
};

/** Every verdict the case ever had; what no longer stands is struck through and says why. */
export function Decisions({ decisions, linked = false }: DecisionsProps) {
  if (decisions.length === 0) return <p className="text-soft">Not decided yet.</p>;
  return (
    <ul className="flex flex-col gap-2">
      {decisions.map((decision) => (
        <li key={decision.decisionId} className="border-l-2 border-edge pl-3">
          <p>
            <span className={decision.stands ? "font-strong" : "line-through"}>
              {VERDICT_WORDS[decision.verdict]}, {CONFIDENCE_WORDS[decision.confidence]}
              {decision.typology && ` (${TYPOLOGY_WORDS[decision.typology].toLowerCase()})`}
            </span>
            {decision.undoneAt && <span> taken back</span>}
            {!decision.stands && !decision.undoneAt && <span> replaced</span>}
          </p>
          {decision.reason && <p>{decision.reason}</p>}
          <p className="text-small text-soft">
            {DECISION_KIND_WORDS[decision.kind]} by {decision.by.name}, <Time at={decision.decidedAt} />
            {decision.undoneAt && (
              <>
                ; taken back <Time at={decision.undoneAt} />
              </>
            )}
            {linked && (
              <>
                {". "}
                <Link
                  href={`/trail/decisions/${decision.decisionId}`}
                  className="underline decoration-edge underline-offset-2"
                >
                  As it was made
                </Link>
              </>
            )}
          </p>
        </li>
      ))}
    </ul>
  );
}
