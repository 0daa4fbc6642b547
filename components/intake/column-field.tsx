import type { ImportField } from "@/lib/imports/fields";
import { Field, Select } from "../ui/field";
import { attributeFor, type Target } from "./columns";
import { FIELD_HINTS, fieldWords } from "./field-words";
import type { FileColumn } from "./file-head";

type ColumnFieldProps = {
  column: FileColumn;
  /** Counted from 1. */
  place: number;
  target: Target;
  fields: readonly ImportField[];
  onChange: (target: Target) => void;
  /** Another column has the same name. */
  nameIsShared: boolean;
  /** Another column stands for the same field. */
  targetIsTaken: boolean;
};

/** One column of the file: its name, its first values, and what it becomes. */
export function ColumnField(props: ColumnFieldProps) {
  const { column, place, target, fields, onChange, nameIsShared, targetIsTaken } = props;
  const attribute = attributeFor(column.name);
  const option = ({ name }: ImportField) => (
    <option key={name} value={name}>
      {fieldWords(name)}
    </option>
  );
  return (
    <div className="min-w-0">
      <Field
        label={column.name || `Column ${place}, without a name`}
        hint={<Samples of={column.samples} />}
        error={targetIsTaken ? "Another column stands for this, too" : null}
      >
        <Select
          value={target ?? ""}
          disabled={nameIsShared}
          onChange={(event) => onChange(event.target.value || null)}
        >
          <option value="">Leave out</option>
          <optgroup label="Required">{fields.filter(({ required }) => required).map(option)}</optgroup>
          <optgroup label="Optional">{fields.filter(({ required }) => !required).map(option)}</optgroup>
          {attribute && (
            <optgroup label="As it is">
              <option value={attribute}>{fieldWords(attribute)}</option>
            </optgroup>
          )}
        </Select>
      </Field>
      <p className="mt-1 min-h-4.5 text-small text-soft">
        {nameIsShared
          ? "Another column has the same name; rename one in the file to send it"
          : target !== null && FIELD_HINTS[target]}
      </p>
    </div>
  );
}

function Samples({ of: samples }: { of: FileColumn["samples"] }) {
  const filled = samples.filter((sample) => sample !== "");
  if (filled.some((sample) => sample === null)) {
    return <>Looks like payment card numbers: rows that hold one are refused</>;
  }
  return (
    <span className="block truncate" title={filled.join(" · ")}>
      {filled.length === 0 ? "Empty in the first rows" : filled.join(" · ")}
    </span>
  );
}
