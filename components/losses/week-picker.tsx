import type { WeeksAround } from "@/lib/losses/losses";
import type { WeekView } from "@/lib/losses/schema";
import { Button, ButtonLink } from "../ui/button";
import { Field, Input, Select } from "../ui/field";

type WeekPickerProps = { week: string; by: WeekView["by"]; weeks: WeeksAround };

/** The week lives in the address, so that it can be linked to and found again. */
export function WeekPicker({ week, by, weeks }: WeekPickerProps) {
  const href = (label: string) => `/losses?week=${label}&by=${by}`;
  return (
    <form action="/losses" className="flex flex-wrap items-end gap-3 pb-5">
      <ButtonLink href={href(weeks.previous)}>Week before</ButtonLink>
      {weeks.next && <ButtonLink href={href(weeks.next)}>Week after</ButtonLink>}
      <Field label="ISO week" className="w-36">
        <Input key={week} name="week" defaultValue={week} pattern="\d{4}-W\d{2}" title="Like 2026-W48" />
      </Field>
      <Field label="Counted by" className="w-52">
        <Select key={by} name="by" defaultValue={by}>
          <option value="transaction">week of the payment</option>
          <option value="booking">week of booking</option>
        </Select>
      </Field>
      <Button type="submit">Show</Button>
    </form>
  );
}
