/** Names and values as the trail keeps them: references, codes and numbers. */
export function FactList({ facts }: { facts: Readonly<Record<string, unknown>> }) {
  return (
    <dl className="mt-1 grid grid-cols-[auto_1fr] gap-x-3 gap-y-0.5 text-small">
      {Object.entries(facts).map(([name, value]) => (
        <div key={name} className="contents">
          <dt className="text-soft">{inWords(name)}</dt>
          <dd className="figures break-all">{textOf(value)}</dd>
        </div>
      ))}
    </dl>
  );
}

/** `policyVersion` → "policy version" */
const inWords = (name: string) => name.replace(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`);

function textOf(value: unknown): string {
  if (value === null) return "none";
  if (Array.isArray(value)) return value.map(textOf).join(", ") || "none";
  return typeof value === "object" ? JSON.stringify(value) : String(value);
}
