"use client";
import { useMutation } from "@tanstack/react-query";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";

export function UnsubscribeForm({ token }: { token: string }) {
  const ended = useMutation<null, ApiProblem>({
    mutationFn: async () => {
      await api("POST /api/unsubscribe/{token}", { token });
      return null;
    },
  });
  return (
    <>
      <div aria-live="polite">
        {ended.isSuccess && (
          <Notice title="Done">
            No further summary is sent to the address this link was sent to. A risk manager can put you back
            on the list.
          </Notice>
        )}
        {ended.error && (
          <Notice kind="error" title="That did not work">
            {ended.error.message}
          </Notice>
        )}
      </div>
      {!ended.isSuccess && (
        <Button look="action" busy={ended.isPending} onClick={() => ended.mutate()} className="mt-3">
          Stop the weekly summaries
        </Button>
      )}
    </>
  );
}
