"use client";
import { type ComponentProps, createContext, type ReactNode, useContext, useId } from "react";

type FieldIds = { id: string; hintId?: string; errorId?: string; required: boolean };

const FieldContext = createContext<FieldIds | null>(null);

type FieldProps = {
  label: ReactNode;
  hint?: ReactNode;
  /** What is wrong and how to mend it; shown beneath and read out with the control. */
  error?: string | null | undefined;
  required?: boolean;
  className?: string;
  /** One of Input, Select or TextArea. */
  children: ReactNode;
};

/** Label, control, hint and error, tied together for screen readers. */
export function Field({ label, hint, error, required = false, className = "", children }: FieldProps) {
  const id = useId();
  const ids: FieldIds = {
    id,
    required,
    ...(hint !== undefined && { hintId: `${id}-hint` }),
    ...(error && { errorId: `${id}-error` }),
  };
  return (
    <div className={`flex min-w-0 flex-col gap-1 ${className}`}>
      <label htmlFor={id} className="text-small font-strong">
        {label}
      </label>
      {hint !== undefined && (
        <p id={ids.hintId} className="text-small text-soft">
          {hint}
        </p>
      )}
      <FieldContext value={ids}>{children}</FieldContext>
      {error && (
        <p id={ids.errorId} className="text-small text-error">
          <span aria-hidden="true">✕ </span>
          {error}
        </p>
      )}
    </div>
  );
}

function useFieldControl() {
  const ids = useContext(FieldContext);
  if (!ids) return {};
  const describedBy = [ids.hintId, ids.errorId].filter(Boolean).join(" ");
  return {
    id: ids.id,
    required: ids.required,
    "aria-describedby": describedBy || undefined,
    "aria-invalid": ids.errorId ? true : undefined,
  };
}

const CONTROL =
  "w-full min-w-0 rounded-edge border border-edge bg-raised px-2.5 text-body text-ink placeholder:text-soft " +
  "aria-invalid:border-error aria-invalid:border-2 disabled:opacity-60";

type InputProps = ComponentProps<"input"> & {
  /** Shown after the control: "minutes", "EUR". */
  unit?: string;
};

export function Input({ unit, className = "", ...rest }: InputProps) {
  const control = useFieldControl();
  const numeric = rest.type === "number" || rest.inputMode === "decimal" || rest.inputMode === "numeric";
  const input = (
    <input {...control} {...rest} className={`${CONTROL} min-h-9 ${numeric ? "figures" : ""} ${className}`} />
  );
  if (unit === undefined) return input;
  return (
    <span className="flex items-center gap-2">
      {input}
      <span className="shrink-0 text-small text-soft">{unit}</span>
    </span>
  );
}

export function Select({ className = "", ...rest }: ComponentProps<"select">) {
  const control = useFieldControl();
  return <select {...control} {...rest} className={`${CONTROL} min-h-9 ${className}`} />;
}

export function TextArea({ className = "", rows = 3, ...rest }: ComponentProps<"textarea">) {
  const control = useFieldControl();
  return (
    <textarea {...control} {...rest} rows={rows} className={`${CONTROL} resize-y py-1.5 ${className}`} />
  );
}
