"use client";
import { type FormEvent, useState } from "react";
import type { DemoSignIn } from "@/lib/auth/demo-sign-ins";
import { Button } from "../ui/button";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { type Credentials, type SignInProblem, sendCredentials } from "./credentials";
import { DemoPeople } from "./demo-people";

type SignInFormProps = {
  /** Local path to go on to. */
  from: string;
  /** Empty outside the demo. */
  demoSignIns: readonly DemoSignIn[];
};

export function SignInForm({ from, demoSignIns }: SignInFormProps) {
  const [problem, setProblem] = useState<SignInProblem | null>(null);
  const [busy, setBusy] = useState(false);

  async function enter(credentials: Credentials) {
    setBusy(true);
    const refusal = await sendCredentials(credentials);
    if (refusal) {
      setProblem(refusal);
      setBusy(false);
      return;
    }
    // A whole new page, so that nothing of a signed-out screen stays behind.
    window.location.assign(from);
  }

  return (
    <div className="flex max-w-md flex-col gap-6">
      <CredentialsForm problem={problem} busy={busy} onSend={(credentials) => void enter(credentials)} />
      {demoSignIns.length > 0 && (
        <DemoPeople people={demoSignIns} busy={busy} onPick={(credentials) => void enter(credentials)} />
      )}
    </div>
  );
}

type CredentialsFormProps = {
  problem: SignInProblem | null;
  busy: boolean;
  onSend: (credentials: Credentials) => void;
};

function CredentialsForm({ problem, busy, onSend }: CredentialsFormProps) {
  const asksNewPassword = problem?.asksNewPassword ?? false;
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    if (busy) return;
    const form = new FormData(event.currentTarget);
    const text = (name: string) => String(form.get(name) ?? "");
    const credentials = { email: text("email"), password: text("password") };
    onSend(asksNewPassword ? { ...credentials, newPassword: text("newPassword") } : credentials);
  };
  return (
    <form method="post" onSubmit={send} className="flex flex-col gap-4">
      <Field label="E-mail" required>
        <Input name="email" type="email" autoComplete="username" />
      </Field>
      <Field label={asksNewPassword ? "One-time password" : "Password"} required>
        <Input name="password" type="password" autoComplete="current-password" />
      </Field>
      {asksNewPassword && (
        <Field label="New password" hint="At least 15 characters; a few words make a good one." required>
          <Input name="newPassword" type="password" autoComplete="new-password" autoFocus />
        </Field>
      )}
      {problem && <Notice kind={problem.asksNewPassword ? "status" : "error"}>{problem.message}</Notice>}
      <div>
        <Button type="submit" look="action" busy={busy}>
          {asksNewPassword ? "Set the password and sign in" : "Sign in"}
        </Button>
      </div>
    </form>
  );
}
