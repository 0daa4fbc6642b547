/** A browser's cookies, as far as tests need them. */
export class CookieJar {
  private readonly cookies = new Map<string, string>();

  keep(response: Response): void {
    for (const line of response.headers.getSetCookie()) {
      const [pair = ""] = line.split(";");
      const at = pair.indexOf("=");
      const value = pair.slice(at + 1);
      if (value === "") this.cookies.delete(pair.slice(0, at));
      else this.cookies.set(pair.slice(0, at), value);
    }
  }

  get header(): string {
    return [...this.cookies].map(([name, value]) => `${name}=${value}`).join("; ");
  }

  copy(): CookieJar {
    const jar = new CookieJar();
    for (const [name, value] of this.cookies) jar.cookies.set(name, value);
    return jar;
  }
}

/** Fetches as a page of the site would. */
export async function visit(
  url: string,
  path: string,
  jar: CookieJar,
  init: RequestInit = {},
): Promise<Response> {
  const headers = new Headers(init.headers);
  headers.set("Cookie", jar.header);
  headers.set("Origin", new URL(url).origin);
  const response = await fetch(new URL(path, url), { ...init, headers, redirect: "manual" });
  jar.keep(response);
  return response;
}

/** Signs in by next-auth's own protocol. @returns the answer of the last step */
export async function sendSignIn(
  url: string,
  jar: CookieJar,
  credentials: Record<string, string>,
  headers: Record<string, string> = {},
): Promise<Response> {
  const csrf = await visit(url, "/api/auth/csrf", jar);
  const { csrfToken } = (await csrf.json()) as { csrfToken: string };
  return visit(url, "/api/auth/callback/credentials", jar, {
    method: "POST",
    headers,
    body: new URLSearchParams({ callbackUrl: url, ...credentials, csrfToken, json: "true" }),
  });
}

export async function signedIn(url: string, email: string, password: string): Promise<CookieJar> {
  const jar = new CookieJar();
  const response = await sendSignIn(url, jar, { email, password });
  if (response.status !== 200)
    throw new Error(`Sign-in answered ${response.status}: ${await response.text()}`);
  return jar;
}
