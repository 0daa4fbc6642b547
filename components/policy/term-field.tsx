import { Checkbox } from "../ui/choice";
import { Field, Input, Select } from "../ui/field";
import type { Term } from "./terms";

export type FieldProps = {
  term: Term;
  value: string;
  error: string | undefined;
  currencyCode: string;
  onChange: (path: string, value: string) => void;
};

/** The control for one term: a number with its unit, a choice, or a yes or no. */
export function TermField({ term, value, error, currencyCode, onChange }: FieldProps) {
  const { path, label, hint, kind, unit, words } = term;
  if (kind === "flag") {
    return (
      <Checkbox
        label={label}
        hint={hint}
        checked={value === "true"}
        onChange={(event) => onChange(path, String(event.target.checked))}
      />
    );
  }
  return (
    <Field label={label} hint={hint} error={error}>
      {kind === "choice" ? (
        <Select value={value} onChange={(event) => onChange(path, event.target.value)}>
          {Object.entries(words ?? {}).map(([code, name]) => (
            <option key={code} value={code}>
              {name}
            </option>
          ))}
        </Select>
      ) : (
        <Input
          inputMode="decimal"
          autoComplete="off"
          className="max-w-32 text-right"
          unit={kind === "money" ? currencyCode : (unit ?? "")}
          value={value}
          onChange={(event) => onChange(path, event.target.value)}
        />
      )}
    </Field>
  );
}
