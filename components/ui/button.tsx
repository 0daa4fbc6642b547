import Link from "next/link";
import type { ComponentProps } from "react";

type Look = "action" | "plain" | "quiet" | "danger";

const LOOKS: Record<Look, string> = {
  action:
    "font-strong border-accent bg-accent text-on-accent hover:border-accent-strong hover:bg-accent-strong",
  plain: "font-strong border-edge bg-raised text-ink hover:border-ink",
  quiet: "border-transparent text-ink underline decoration-edge underline-offset-4 hover:decoration-ink",
  danger: "font-strong border-error bg-raised text-error hover:bg-error hover:text-paper",
};

const SHAPE =
  "inline-flex items-center justify-center gap-2 rounded-edge border leading-none select-none " +
  "disabled:cursor-not-allowed disabled:opacity-55 aria-disabled:cursor-not-allowed aria-disabled:opacity-55";

function look(kind: Look, small: boolean, className: string): string {
  const size = small ? "min-h-7 px-2 text-small" : "min-h-9 px-3.5 text-body";
  return `${SHAPE} ${size} ${LOOKS[kind]} ${className}`;
}

type ButtonProps = ComponentProps<"button"> & {
  look?: Look;
  small?: boolean;
  /** Work goes on: announced, and a second press does nothing. */
  busy?: boolean;
};

export function Button({
  look: kind = "plain",
  small = false,
  busy = false,
  className = "",
  ...rest
}: ButtonProps) {
  return (
    <button
      type="button"
      {...rest}
      aria-busy={busy || undefined}
      aria-disabled={busy || rest["aria-disabled"]}
      onClick={busy ? (event) => event.preventDefault() : rest.onClick}
      className={look(kind, small, className)}
    />
  );
}

type ButtonLinkProps = ComponentProps<typeof Link> & { look?: Look; small?: boolean };

/** A link that looks like a button: it goes somewhere, it does nothing. */
export function ButtonLink({
  look: kind = "plain",
  small = false,
  className = "",
  ...rest
}: ButtonLinkProps) {
  return <Link {...rest} className={look(kind, small, className)} />;
}
