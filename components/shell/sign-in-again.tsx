"use client";
import { useRouter } from "next/navigation";
import { getSession } from "next-auth/react";
import { type FormEvent, useCallback, useEffect, useRef, useState } from "react";
import { onSessionEnded } from "../api";
import { sendCredentials } from "../sign-in/credentials";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { IDLE_MINUTES, useIdle } from "./activity";

/** The session's cookie is renewed this often while the person works. */
const RENEW_EVERY_MS = 60_000;

/**
 * Stands over the page when the person was away or the session ended, and asks for the password. What lies beneath
 * keeps its state, so that a note being written is still there afterwards.
 */
export function SignInAgain({ personId }: { personId: string }) {
  const renewedMs = useRef(0);
  const renew = useCallback(() => {
    if (Date.now() - renewedMs.current < RENEW_EVERY_MS) return;
    renewedMs.current = Date.now();
    void getSession();
  }, []);
  const [idle, wake] = useIdle(IDLE_MINUTES, renew);
  const [ended, setEnded] = useState(false);
  const waiting = useRef<((signedIn: boolean) => void)[]>([]);
  useReloadForAnother(personId);
  useEffect(() => {
    onSessionEnded(
      () =>
        new Promise((resolve) => {
          waiting.current.push(resolve);
          setEnded(true);
        }),
    );
    return () => onSessionEnded(null);
  }, []);

  const router = useRouter();
  function goOn() {
    wake();
    setEnded(false);
    for (const resolve of waiting.current.splice(0)) resolve(true);
    router.refresh();
  }
  return (
    <Dialog
      open={idle || ended}
      onOpenChange={() => {}}
      mustAnswer
      opaque
      title="Sign in again"
      description={
        idle
          ? `Nothing was touched for ${IDLE_MINUTES} minutes. What you were writing is kept.`
          : "Your session has ended. What you were writing is kept."
      }
    >
      <AgainForm onSignedIn={goOn} />
    </Dialog>
  );
}

/** Somebody else signing in here must not find the work of the person before. */
function useReloadForAnother(personId: string) {
  const first = useRef(personId);
  useEffect(() => {
    if (first.current !== personId) window.location.reload();
  }, [personId]);
}

function AgainForm({ onSignedIn }: { onSignedIn: () => void }) {
  const [problem, setProblem] = useState<string | null>(null);
  const [busy, setBusy] = useState(false);
  async function enter(form: FormData) {
    setBusy(true);
    const refusal = await sendCredentials({
      email: String(form.get("email")),
      password: String(form.get("password")),
    });
    setBusy(false);
    if (refusal) setProblem(refusal.message);
    else onSignedIn();
  }
  const submit = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    if (!busy) void enter(new FormData(event.currentTarget));
  };
  return (
    <form method="post" onSubmit={submit} className="flex flex-col gap-4">
      <Field label="E-mail" required>
        <Input name="email" type="email" autoComplete="username" />
      </Field>
      <Field label="Password" required>
        <Input name="password" type="password" autoComplete="current-password" />
      </Field>
      {problem && <Notice kind="error">{problem}</Notice>}
      <div className="flex justify-end">
        <Button type="submit" look="action" busy={busy}>
          Go on
        </Button>
      </div>
    </form>
  );
}
