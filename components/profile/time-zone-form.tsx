"use client";
import { useMutation } from "@tanstack/react-query";
import { useRouter } from "next/navigation";
import type { FormEvent } from "react";
import type { ProfileView } from "@/lib/profile/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, Select } from "../ui/field";
import { Notice } from "../ui/notice";

type TimeZoneFormProps = { timeZone: string; zones: readonly string[] };

export function TimeZoneForm({ timeZone, zones }: TimeZoneFormProps) {
  const router = useRouter();
  const set = useMutation<ProfileView | null, ApiProblem, string>({
    mutationFn: (zone) => api("PUT /api/profile/time-zone", { timeZone: zone }),
    onSuccess: () => router.refresh(),
  });
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    set.mutate(String(new FormData(event.currentTarget).get("timeZone")));
  };
  return (
    <form onSubmit={send} className="flex max-w-md flex-col gap-4">
      <Field
        label="Time zone"
        hint="Times on screen and the hour of your mails follow it"
        error={set.error?.errorAt("timeZone")}
      >
        <Select name="timeZone" defaultValue={timeZone}>
          {zones.map((zone) => (
            <option key={zone} value={zone}>
              {zone.replaceAll("_", " ")}
            </option>
          ))}
        </Select>
      </Field>
      {set.error && set.error.errors.length === 0 && <Notice kind="error">{set.error.message}</Notice>}
      {set.isSuccess && <Notice>Time zone set.</Notice>}
      <div>
        <Button type="submit" busy={set.isPending}>
          Set time zone
        </Button>
      </div>
    </form>
  );
}
