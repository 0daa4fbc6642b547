import Link from "next/link";
import type { ComponentProps, ReactNode } from "react";

type TableProps = ComponentProps<"table"> & {
  /** Says what the rows are; read out first, shown unless `captionHidden`. */
  caption: ReactNode;
  captionHidden?: boolean;
};

/** A plain table that scrolls sideways by itself on a narrow screen. */
export function Table({ caption, captionHidden = false, className = "", children, ...rest }: TableProps) {
  return (
    <section
      className="max-w-full overflow-x-auto"
      aria-label={typeof caption === "string" ? caption : "Table"}
      // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reachable by keyboard (WCAG 2.1.1)
      tabIndex={0}
    >
      <table {...rest} className={`w-full border-collapse text-left ${className}`}>
        <caption className={captionHidden ? "sr-only" : "pb-2 text-left text-small text-soft"}>
          {caption}
        </caption>
        {children}
      </table>
    </section>
  );
}

type CellProps = { numeric?: boolean };

const HEAD = "border-b border-edge px-2 py-1.5 text-small font-strong first:pl-0 last:pr-0 align-bottom";

export function Th({ numeric = false, className = "", ...rest }: ComponentProps<"th"> & CellProps) {
  return <th scope="col" {...rest} className={`${HEAD} ${numeric ? "text-right" : ""} ${className}`} />;
}

type SortableThProps = CellProps & {
  children: ReactNode;
  sorted: "ascending" | "descending" | "none";
  /** Where the page with the other order is: sorting lives in the URL. */
  href: string;
};

export function SortableTh({ children, sorted, href, numeric = false }: SortableThProps) {
  const arrow = { ascending: "↑", descending: "↓", none: "↕" }[sorted];
  return (
    <th scope="col" aria-sort={sorted} className={`${HEAD} ${numeric ? "text-right" : ""}`}>
      <Link href={href} scroll={false} className="hover:underline">
        {children} <span aria-hidden="true">{arrow}</span>
      </Link>
    </th>
  );
}

export function Td({ numeric = false, className = "", ...rest }: ComponentProps<"td"> & CellProps) {
  const side = numeric ? "figures text-right" : "";
  return (
    <td
      {...rest}
      className={`border-b border-rule px-2 py-1.5 align-top first:pl-0 last:pr-0 ${side} ${className}`}
    />
  );
}

/** First cell of a row that names it. */
export function RowTh({ className = "", ...rest }: ComponentProps<"th">) {
  return (
    <th
      scope="row"
      {...rest}
      className={`border-b border-rule px-2 py-1.5 text-left align-top font-plain first:pl-0 ${className}`}
    />
  );
}
