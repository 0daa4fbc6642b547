"use client";
import Link from "next/link";
import { usePathname } from "next/navigation";
import { type ReactNode, useState } from "react";
import { Mark } from "./mark";
import { SignInAgain } from "./sign-in-again";
import { SignOut } from "./sign-out";
import { ThemeSwitch } from "./theme-switch";

export type MenuPage = { path: string; name: string };

type AppShellProps = {
  pages: readonly MenuPage[];
  person: { personId: string; name: string };
  children: ReactNode;
};

/** The bar every signed-in screen stands under, with the pages this person's roles may see. */
export function AppShell({ pages, person, children }: AppShellProps) {
  const pathname = usePathname();
  // Remembering where the menu was opened closes it by itself on the next page.
  const [menuOpenAt, setMenuOpenAt] = useState<string | null>(null);
  const menuOpen = menuOpenAt === pathname;
  return (
    <>
      <a
        href="#main"
        className="absolute top-1 left-1 z-50 -translate-y-16 rounded-edge bg-accent px-3 py-2 text-on-accent focus:translate-y-0"
      >
        Skip to the content
      </a>
      <header className="flex min-h-11 flex-wrap items-center gap-x-5 border-b border-rule px-4 sm:px-6">
        <Link href="/" className="flex items-center gap-2 py-2 font-strong tracking-wide">
          <Mark />
          Cupel
        </Link>
        <button
          type="button"
          aria-expanded={menuOpen}
          aria-controls="menu"
          onClick={() => setMenuOpenAt(menuOpen ? null : pathname)}
          className="ml-auto min-h-9 rounded-edge border border-edge px-3 text-small font-strong md:hidden"
        >
          Menu
        </button>
        <div
          id="menu"
          className={`${menuOpen ? "flex" : "hidden"} w-full flex-col gap-x-5 pb-3 md:flex md:w-auto md:flex-1 md:flex-row md:items-center md:pb-0`}
        >
          <nav aria-label="Pages" className="flex flex-col gap-x-5 md:flex-row">
            {pages.map((page) => (
              <MenuLink key={page.path} page={page} current={isWithin(pathname, page.path)} />
            ))}
          </nav>
          <div className="flex flex-wrap items-center gap-x-4 gap-y-1 pt-2 text-small md:ml-auto md:pt-0">
            <ThemeSwitch />
            <Link href="/profile" className="text-soft hover:text-ink hover:underline">
              {person.name}
            </Link>
            <SignOut />
          </div>
        </div>
      </header>
      <main id="main" tabIndex={-1} className="outline-none">
        {children}
      </main>
      <SignInAgain personId={person.personId} />
    </>
  );
}

function isWithin(pathname: string, path: string): boolean {
  return pathname === path || pathname.startsWith(`${path}/`);
}

function MenuLink({ page, current }: { page: MenuPage; current: boolean }) {
  return (
    <Link
      href={page.path}
      aria-current={current ? "page" : undefined}
      className="border-transparent py-2 text-soft hover:text-ink aria-[current=page]:border-ink aria-[current=page]:font-strong aria-[current=page]:text-ink md:border-b-2"
    >
      {page.name}
    </Link>
  );
}
