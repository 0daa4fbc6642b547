"use client";
import Link from "next/link";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { actLine } from "./act-line";
import type { Sent } from "./desk-state";

type RefusalsProps = { sent: readonly Sent[]; onDismiss: (sentId: string) => void };

/** What the server refused, until the person has seen to it, with the note that went with it. */
export function Refusals({ sent, onDismiss }: RefusalsProps) {
  const refused = sent.filter((one) => one.state === "refused");
  return refused.map(({ sentId, case: { caseId, number }, act, problem }) => (
    <Notice key={sentId} kind="error" title={`Case ${number} is not ${actLine(act)}`} className="m-2">
      <p>{problem}.</p>
      {act.note.trim() && (
        <p className="mt-1">
          Your note: <q className="whitespace-pre-wrap">{act.note}</q>
        </p>
      )}
      <p className="mt-1 flex gap-4">
        <Link href={`/cases/${caseId}`} className="underline">
          Open case {number}
        </Link>
        <Button look="quiet" small className="px-0" onClick={() => onDismiss(sentId)}>
          Seen
        </Button>
      </p>
    </Notice>
  ));
}
