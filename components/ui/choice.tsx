"use client";
import { type ComponentProps, type ReactNode, useId } from "react";

type ChoiceProps = Omit<ComponentProps<"input">, "type"> & { label: ReactNode; hint?: ReactNode };

const BOX = "mt-0.5 size-4.5 shrink-0 accent-accent";

function Choice({
  type,
  label,
  hint,
  className = "",
  ...rest
}: ChoiceProps & { type: "checkbox" | "radio" }) {
  const id = useId();
  return (
    <div className={`flex min-h-6 items-start gap-2 ${className}`}>
      <input
        {...rest}
        id={id}
        type={type}
        aria-describedby={hint ? `${id}-hint` : undefined}
        className={BOX}
      />
      <div className="min-w-0">
        <label htmlFor={id}>{label}</label>
        {hint && (
          <p id={`${id}-hint`} className="text-small text-soft">
            {hint}
          </p>
        )}
      </div>
    </div>
  );
}

export function Checkbox(props: ChoiceProps) {
  return <Choice type="checkbox" {...props} />;
}

export function Radio(props: ChoiceProps) {
  return <Choice type="radio" {...props} />;
}

/** Several checkboxes or radios under one question. */
export function ChoiceSet({ legend, children }: { legend: ReactNode; children: ReactNode }) {
  return (
    <fieldset className="flex flex-col gap-1.5">
      <legend className="mb-1 text-small font-strong">{legend}</legend>
      {children}
    </fieldset>
  );
}
