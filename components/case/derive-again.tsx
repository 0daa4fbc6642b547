"use client";
import { useMutation } from "@tanstack/react-query";
import type { DerivationView } from "@/lib/audit/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { WithoutSignals } from "./without-signals";

type DeriveAgainProps = {
  caseId: string;
  scoreId: string;
  /** Which score, for those who hear the button and do not see its row. */
  what: string;
};

/** Folds the label log as of the score's version and says whether the score comes out again. */
export function DeriveAgain({ caseId, scoreId, what }: DeriveAgainProps) {
  const derivation = useMutation<DerivationView | null, ApiProblem>({
    mutationFn: () => api("GET /api/cases/{id}/scores/{scoreId}/derivation", { id: caseId, scoreId }),
  });
  const { data, error } = derivation;
  return (
    <>
      <Button
        small
        busy={derivation.isPending}
        aria-label={`Derive again: ${what}`}
        onClick={() => derivation.mutate()}
      >
        Derive again
      </Button>
      {error && <Notice className="mt-2" kind="error" title={error.message} />}
      {data && <Outcome derivation={data} />}
    </>
  );
}

function Outcome({ derivation }: { derivation: DerivationView }) {
  const { equal, kept, derived, labels, problem } = derivation;
  const title = equal
    ? "It comes out again, equal bit for bit."
    : "It does not come out: the record is not what this scorer gave.";
  return (
    <Notice className="mt-2" kind={equal ? "status" : "error"} title={title}>
      <dl className="grid w-fit grid-cols-[auto_auto] gap-x-4 text-small">
        <dt>Kept, log-odds in nats</dt>
        <dd className="figures break-all">{figure(kept)}</dd>
        <dt>Derived</dt>
        <dd className="figures break-all">{derived === null ? "nothing" : figure(derived)}</dd>
      </dl>
      <p className="text-small text-soft">
        {problem ?? `From the label log as it stood then: ${labels} ${labels === 1 ? "label" : "labels"}.`}
        {!equal && kept === derived && " The totals agree; a part of what was kept does not."}
      </p>
      {!problem && (
        <div className="mt-1">
          <WithoutSignals lines={derivation.withoutSignals} past />
        </div>
      )}
    </Notice>
  );
}

/** To the last digit: what differs may be the last bit. */
const figure = (value: number) => String(value).replace("-", "−");
