"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, useRef } from "react";
import { type ApiProblem, api } from "../api";
import { sendCredentials } from "../sign-in/credentials";
import { Button } from "../ui/button";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";

type Passwords = { currentPassword: string; newPassword: string };

/** The change ends every session of the person; this page signs itself in again with the new password. */
export function PasswordForm({ email }: { email: string }) {
  const formRef = useRef<HTMLFormElement>(null);
  const change = useMutation<void, ApiProblem, Passwords>({
    mutationFn: async (passwords) => {
      await api("POST /api/profile/password", passwords);
      await sendCredentials({ email, password: passwords.newPassword });
    },
    onSuccess: () => formRef.current?.reset(),
  });
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    change.mutate({
      currentPassword: String(form.get("currentPassword")),
      newPassword: String(form.get("newPassword")),
    });
  };
  const problem = change.error;
  return (
    <form ref={formRef} method="post" onSubmit={send} className="flex max-w-md flex-col gap-4">
      <input type="hidden" name="username" autoComplete="username" value={email} readOnly />
      <Field label="Current password" error={problem?.errorAt("currentPassword")} required>
        <Input name="currentPassword" type="password" autoComplete="current-password" />
      </Field>
      <Field
        label="New password"
        hint="At least 15 characters; a few words make a good one. Pasting is fine."
        error={problem?.errorAt("newPassword")}
        required
      >
        <Input name="newPassword" type="password" autoComplete="new-password" />
      </Field>
      {problem && problem.errors.length === 0 && <Notice kind="error">{problem.message}</Notice>}
      {change.isSuccess && <Notice title="Your password is changed">Your other sessions have ended.</Notice>}
      <div>
        <Button type="submit" look="action" busy={change.isPending}>
          Change password
        </Button>
      </div>
    </form>
  );
}
