import { ROLES } from "@/lib/auth/codes";
import type { PeopleInput } from "@/lib/people/schema";
import { Button, ButtonLink } from "../ui/button";
import { Field, Input, Select } from "../ui/field";
import { ROLE_WORDS } from "../words";

/** A plain form: the filters are the page's address. */
export function PeopleFilters({ filters }: { filters: PeopleInput }) {
  const isFiltered = Object.values(filters).some((value) => value !== undefined);
  return (
    <search>
      <form method="get" className="mb-4 flex flex-wrap items-end gap-3">
        <Field label="Name or e-mail" className="w-64">
          <Input name="search" type="search" defaultValue={filters.search ?? ""} maxLength={120} />
        </Field>
        <Field label="Role" className="w-44">
          <Select name="role" defaultValue={filters.role ?? ""}>
            <option value="">Any</option>
            {ROLES.map((role) => (
              <option key={role} value={role}>
                {ROLE_WORDS[role]}
              </option>
            ))}
          </Select>
        </Field>
        <Field label="Account" className="w-36">
          <Select name="state" defaultValue={filters.state ?? ""}>
            <option value="">Any</option>
            <option value="active">Active</option>
            <option value="deactivated">Deactivated</option>
          </Select>
        </Field>
        <Button type="submit">Search</Button>
        {isFiltered && (
          <ButtonLink look="quiet" href="/people">
            Clear
          </ButtonLink>
        )}
      </form>
    </search>
  );
}
