"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, useId } from "react";
import type { VerifyView } from "@/lib/trail/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";

type Noted = { notedSeq?: number; notedHash?: string };

/** Works the chain out again; with a place and hash that were noted down earlier, a cut-off end shows as well. */
export function VerifyPanel() {
  const formId = useId();
  const verify = useMutation<VerifyView | null, ApiProblem, Noted>({
    mutationFn: (noted) => api("GET /api/trail/verify", noted),
  });
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    const seq = String(form.get("notedSeq") ?? "").trim();
    const hash = String(form.get("notedHash") ?? "")
      .trim()
      .toLowerCase();
    verify.mutate({ ...(seq && { notedSeq: Number(seq) }), ...(hash && { notedHash: hash }) });
  };
  const problem = verify.error;
  return (
    <div className="flex flex-col gap-4">
      <form id={formId} onSubmit={send} className="flex flex-wrap items-end gap-3">
        <Field label="Place noted earlier" error={problem?.errorAt("notedSeq")} className="w-44">
          <Input name="notedSeq" inputMode="numeric" />
        </Field>
        <Field label="Its hash" error={problem?.errorAt("notedHash")} className="w-full max-w-lg">
          <Input name="notedHash" spellCheck={false} autoComplete="off" className="font-mono" />
        </Field>
        <Button type="submit" look="action" busy={verify.isPending}>
          Verify the chain
        </Button>
      </form>
      {verify.isPending && <p role="status">Working out every hash again …</p>}
      {problem && problem.errors.length === 0 && <Notice kind="error">{problem.message}</Notice>}
      {verify.data && <Result check={verify.data} />}
    </div>
  );
}

function Result({ check }: { check: VerifyView }) {
  const isWhole = check.intact && check.notedStands !== false;
  return (
    <Notice kind={isWhole ? "status" : "error"} title={titleOf(check)}>
      <p>
        Note down the head outside Cupel, and give it here next time: place{" "}
        <strong className="figures">{check.headSeq}</strong>, hash
      </p>
      <p className="figures break-all select-all">{check.headHash}</p>
    </Notice>
  );
}

function titleOf({ entries, intact, firstBrokenSeq, notedStands }: VerifyView): string {
  if (!intact)
    return `The chain is broken at place ${firstBrokenSeq}: that entry was changed, removed or added.`;
  if (notedStands === false) {
    return "The chain holds in itself, but the entry you noted is gone or not what it was.";
  }
  const noted = notedStands ? " The entry you noted stands as it was." : "";
  return `The chain is intact: ${entries} entries, each hash worked out again.${noted}`;
}
