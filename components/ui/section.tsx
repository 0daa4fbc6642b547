import { type ReactNode, useId } from "react";

type PageHeadProps = { title: ReactNode; lead?: ReactNode; children?: ReactNode };

/** Title of a screen, one sentence on what it is for, and its actions. */
export function PageHead({ title, lead, children }: PageHeadProps) {
  return (
    <header className="flex flex-wrap items-end justify-between gap-x-6 gap-y-3 pb-5">
      <div className="min-w-0 max-w-[70ch]">
        <h1 className="text-figure font-strong tracking-tight">{title}</h1>
        {lead && <p className="mt-1 text-soft">{lead}</p>}
      </div>
      {children && <div className="flex flex-wrap items-center gap-2">{children}</div>}
    </header>
  );
}

/** The one column that every screen but the Desk is set in. */
export function Page({ children, wide = false }: { children: ReactNode; wide?: boolean }) {
  return (
    <div className={`mx-auto w-full px-4 py-6 sm:px-6 ${wide ? "max-w-[110rem]" : "max-w-[76rem]"}`}>
      {children}
    </div>
  );
}

type SectionProps = {
  title: ReactNode;
  lead?: ReactNode;
  /** Actions that belong to this section. */
  actions?: ReactNode;
  level?: 2 | 3;
  children: ReactNode;
};

export function Section({ title, lead, actions, level = 2, children }: SectionProps) {
  const id = useId();
  const Heading = level === 2 ? "h2" : "h3";
  return (
    <section aria-labelledby={id} className="border-t border-rule py-5 first-of-type:border-t-edge">
      <div className="mb-3 flex flex-wrap items-baseline justify-between gap-x-4 gap-y-2">
        <div className="max-w-[70ch]">
          <Heading id={id} className={level === 2 ? "text-title font-strong" : "text-body font-strong"}>
            {title}
          </Heading>
          {lead && <p className="text-small text-soft">{lead}</p>}
        </div>
        {actions && <div className="flex flex-wrap gap-2">{actions}</div>}
      </div>
      {children}
    </section>
  );
}
