import type { SearchOptions } from "@/lib/trail/search-options";
import { actWords } from "../act-words";
import { Button, ButtonLink } from "../ui/button";
import { Field, Input, Select } from "../ui/field";

/** As the page's address has them: days of the person's calendar. */
export type TrailFilterFields = {
  act?: string;
  person?: string;
  case?: string;
  subject?: string;
  from?: string;
  to?: string;
};

type TrailFiltersProps = {
  fields: TrailFilterFields;
  options: SearchOptions;
  errors: Readonly<Record<string, string>>;
};

export function TrailFilters({ fields, options, errors }: TrailFiltersProps) {
  const isFiltered = Object.keys(fields).length > 0;
  return (
    <search>
      <form method="get" className="flex flex-wrap items-end gap-3">
        <Field label="Act" error={errors.act} className="w-56">
          <Select name="act" defaultValue={fields.act ?? ""}>
            <option value="">Any</option>
            {options.acts.map((act) => (
              <option key={act} value={act}>
                {actWords(act)}
              </option>
            ))}
          </Select>
        </Field>
        <Field label="Person" error={errors.person} className="w-48">
          <Select name="person" defaultValue={fields.person ?? ""}>
            <option value="">Anybody</option>
            {options.people.map(({ id, name }) => (
              <option key={id} value={id}>
                {name}
              </option>
            ))}
          </Select>
        </Field>
        <Field label="Case number" error={errors.case} className="w-32">
          <Input name="case" inputMode="numeric" defaultValue={fields.case ?? ""} maxLength={36} />
        </Field>
        <Field label="From" error={errors.from} className="w-40">
          <Input name="from" type="date" defaultValue={fields.from ?? ""} />
        </Field>
        <Field label="To, inclusive" error={errors.to} className="w-40">
          <Input name="to" type="date" defaultValue={fields.to ?? ""} />
        </Field>
        {fields.subject && <input type="hidden" name="subject" value={fields.subject} />}
        <Button type="submit">Search</Button>
        {isFiltered && (
          <ButtonLink look="quiet" href="/trail">
            Clear
          </ButtonLink>
        )}
      </form>
    </search>
  );
}
