import Link from "next/link";
import { natsToDecibans } from "@/lib/decibans";
import type { OwnSignalView } from "@/lib/signals/own-schema";
import { Button } from "../ui/button";
import { Decibans } from "../ui/probability";
import { Time } from "../ui/time";
import { numberText } from "./number-text";

export type OwnAct = "on" | "off" | "archive";

type OwnCardProps = {
  signal: OwnSignalView;
  mayManage: boolean;
  onEdit: () => void;
  onAct: (act: OwnAct) => void;
};

const STATE_WORDS = { draft: "Draft: counts for nothing yet", on: "On", off: "Off" } as const;

export function OwnCard({ signal, mayManage, onEdit, onAct }: OwnCardProps) {
  const { name, sentence, formula, state, middle, reach, weight, waiting } = signal;
  const nameId = `signal-${signal.signalId}`;
  return (
    <li
      aria-labelledby={nameId}
      className="grid gap-x-8 gap-y-3 border-b border-rule py-4 last:border-b-0 lg:grid-cols-[1fr_19rem]"
    >
      <div className="min-w-0">
        <div className="flex flex-wrap items-baseline gap-x-3">
          <h3 id={nameId} className="font-strong">
            {name}
          </h3>
          <span className={`text-small ${state === "on" ? "font-strong" : "text-soft"}`}>
            {STATE_WORDS[state]}
          </span>
        </div>
        <p className="max-w-[70ch] text-soft">{sentence}</p>
        <p className="mt-2 overflow-x-auto rounded-edge border border-rule bg-raised px-2 py-1.5 font-mono text-small break-words whitespace-pre-wrap">
          {formula}
        </p>
        {waiting && (
          <p className="mt-2 border-l-4 border-l-accent bg-raised px-3 py-2">
            To be switched {waiting.to}: proposed by {waiting.proposedBy} on <Time at={waiting.proposedAt} />.
            A second person decides it among the{" "}
            <Link href="/learning#approvals" className="underline underline-offset-4">
              approvals
            </Link>
            .
          </p>
        )}
      </div>
      <div className="flex flex-col gap-3">
        <dl className="grid grid-cols-[max-content_1fr] gap-x-4 gap-y-1 text-small">
          <dt className="text-soft">Weight now</dt>
          <dd>
            {weight === null ? (
              "none"
            ) : (
              <>
                <Decibans decibans={natsToDecibans(weight)} /> decibans at the top of its scale
              </>
            )}
          </dd>
          <dt className="text-soft">Middle and reach</dt>
          <dd className="figures">
            {numberText(middle)} ± {numberText(reach)}
          </dd>
          <dt className="text-soft">Last changed</dt>
          <dd>
            <Time at={signal.changedAt} as="day" />
          </dd>
          <dt className="text-soft">Defined by</dt>
          <dd>{signal.createdBy}</dd>
        </dl>
        {mayManage && !waiting && (
          <div className="flex flex-wrap gap-2">
            {signal.mayEdit && (
              <Button small onClick={onEdit}>
                Edit
              </Button>
            )}
            <Button small onClick={() => onAct(state === "on" ? "off" : "on")}>
              Propose to switch {state === "on" ? "off" : "on"}
            </Button>
            {state !== "on" && (
              <Button small look="quiet" onClick={() => onAct("archive")}>
                Put away
              </Button>
            )}
          </div>
        )}
      </div>
    </li>
  );
}
