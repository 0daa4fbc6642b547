"use client";
import Link from "next/link";
import { Notice } from "../ui/notice";
import { actLine } from "./act-line";
import type { Sent } from "./desk-state";

type RefusalsProps = { sent: readonly Sent[]; onDismiss: (sentId: string) => void };

/** What the server refused, until the person has seen to it, with the note that went with it. */
export function Refusals({ sent, onDismiss }: RefusalsProps) {
  const refused = sent.filter((one) => one.state === "refused");
  if (refused.length === 0) return null;
  return (
    <div className="max-h-[40vh] overflow-y-auto bench:max-h-24">
      {refused.map(({ sentId, case: { caseId, number }, act, problem }) => (
        <Notice key={sentId} kind="error" className="border-rule border-t">
          <div className="flex flex-wrap items-baseline gap-x-4 gap-y-1 text-small">
            <p>
              <strong className="font-strong text-error">
                <span aria-hidden="true">✕ </span>Case {number} is not {actLine(act)}:
              </strong>{" "}
              {problem}.
              {act.note.trim() && (
                <>
                  {" "}
                  Your note: <q className="whitespace-pre-wrap">{act.note}</q>
                </>
              )}
            </p>
            <span className="ml-auto flex gap-4">
              <Link href={`/cases/${caseId}`} className="underline decoration-edge underline-offset-2">
                Open case {number}
              </Link>
              <button
                type="button"
                onClick={() => onDismiss(sentId)}
                className="underline decoration-edge underline-offset-2"
              >
                Seen
              </button>
            </span>
          </div>
        </Notice>
      ))}
    </div>
  );
}
