/** The key that does the same, printed beside a button; nothing where single keys are switched off. */
export function KeyCap({ name }: { name: string | null }) {
  if (name === null) return null;
  return (
    <span
      aria-hidden="true"
      className="hidden min-w-4.5 rounded-edge border border-edge px-1 text-center font-mono font-plain text-small text-soft leading-4 sm:inline-block"
    >
      {name}
    </span>
  );
}
