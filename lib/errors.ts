export type FieldError = { path: string; message: string };

const STATUS = {
  unauthenticated: 401,
  forbidden: 403,
  not_found: 404,
  conflict: 409,
  too_large: 413,
  unsupported_media: 415,
  invalid: 422,
  rule_broken: 422,
  too_many: 429,
  gone_away: 499,
  unavailable: 503,
} as const;

export type ErrorCode = keyof typeof STATUS;

/** Something the caller can understand and act on; everything else is a fault of ours and shows a request id only. */
export class KnownError extends Error {
  readonly code: ErrorCode;
  readonly errors: readonly FieldError[];
  readonly headers: Readonly<Record<string, string>>;
  readonly status: number;

  constructor(
    code: ErrorCode,
    message: string,
    extra: { errors?: readonly FieldError[]; headers?: Record<string, string>; status?: number } = {},
  ) {
    super(message);
    this.name = "KnownError";
    this.code = code;
    this.errors = extra.errors ?? [];
    this.headers = extra.headers ?? {};
    this.status = extra.status ?? STATUS[code];
  }
}

export const unauthenticated = (message = "Sign in or send a valid key") =>
  new KnownError("unauthenticated", message);
export const forbidden = (message = "Your role does not allow this") => new KnownError("forbidden", message);
export const notFound = (what: string) => new KnownError("not_found", `${what} was not found`);
export const conflict = (message: string) => new KnownError("conflict", message);
export const ruleBroken = (message: string, path = "") =>
  new KnownError("rule_broken", message, { errors: path ? [{ path, message }] : [] });
export const invalid = (errors: readonly FieldError[], message = "Some fields are not right") =>
  new KnownError("invalid", message, { errors });
