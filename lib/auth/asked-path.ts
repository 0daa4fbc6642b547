/** Set by proxy.ts on every page request, over whatever the client may have sent under this name. */
export const ASKED_PATH_HEADER = "x-cupel-asked-path";

/** Where to go after signing in: a path of this site, and nothing that a browser could read as another site. */
export function localPath(from: string | undefined): string {
  if (!from || !/^\/(?![/\\])[\x21-\x7e]*$/.test(from) || from.includes("\\")) return "/";
  const url = new URL(from, "http://cupel.invalid");
  if (url.host !== "cupel.invalid" || url.pathname.startsWith("/sign-in")) return "/";
  return `${url.pathname}${url.search}${url.hash}`;
}
