import { HttpErrorResponse } from '@angular/common/http';
import { type Problem, problemSchema } from '@halfdeep/contracts';

/** What the server refused, or why it could not be reached: RFC 9457 problem details with the fields they name. */
export class ApiProblem extends Error {
  override readonly name = 'ApiProblem';
  /** HTTP status; 0 when no answer arrived. */
  readonly status: number;
  readonly title: string;
  readonly detail: string;
  /** Message of each wrong field, by JSON pointer into what was sent ("/setup/layer/restThicknessM"). */
  readonly fields: ReadonlyMap<string, string>;

  constructor(
    readonly problem: Problem,
    /** Seconds to wait before trying again, when the server said so. */
    readonly retryAfterSeconds: number | null = null,
  ) {
    super(problem.detail ?? problem.title);
    this.status = problem.status;
    this.title = problem.title;
    this.detail = problem.detail ?? '';
    this.fields = new Map((problem.errors ?? []).map((error) => [error.pointer, error.detail]));
  }
}

/** Brings whatever HttpClient or a schema threw into one shape; the sentence is fit to be shown. */
export function toApiProblem(error: unknown): ApiProblem {
  if (error instanceof ApiProblem) return error;
  if (!(error instanceof HttpErrorResponse))
    return problemOf(-1, 'This answer cannot be read', `The page and the server disagree: ${messageOf(error)}`);
  if (error.status === 0)
    return problemOf(0, 'No connection', 'The server did not answer. What was saved is safe; try again in a moment.');
  const parsed = problemSchema.safeParse(bodyOf(error.error));
  const retryAfter = waitOf(error.headers.get('Retry-After'));
  if (parsed.success) return new ApiProblem(parsed.data, retryAfter);
  return problemOf(
    error.status,
    error.status >= 500 ? 'The server failed' : 'The server refused',
    `It answered ${error.status}${error.statusText ? ` ${error.statusText}` : ''} without saying why.`,
    retryAfter,
  );
}

function problemOf(status: number, title: string, detail: string, retryAfter: number | null = null): ApiProblem {
  return new ApiProblem({ type: 'about:blank', title, status, detail }, retryAfter);
}

/** Requests for binary slices get their refusal as bytes; they hold the same JSON. */
function bodyOf(body: unknown): unknown {
  // By name, not by class: bytes can come from another realm.
  const bytes = Object.prototype.toString.call(body) === '[object ArrayBuffer]';
  const text = bytes ? new TextDecoder().decode(body as ArrayBuffer) : typeof body === 'string' ? body : undefined;
  if (text === undefined) return body;
  try {
    return JSON.parse(text) as unknown;
  } catch (error) {
    if (error instanceof SyntaxError) return null; // a proxy's page, not a problem document
    throw error;
  }
}

/** Retry-After in its form of seconds or of a date. */
function waitOf(header: string | null): number | null {
  if (header === null) return null;
  const seconds = Number(header);
  if (Number.isFinite(seconds)) return Math.max(0, Math.ceil(seconds));
  const until = Date.parse(header);
  return Number.isNaN(until) ? null : Math.max(0, Math.ceil((until - Date.now()) / 1000));
}

function messageOf(error: unknown): string {
  return error instanceof Error ? error.message : String(error);
}
