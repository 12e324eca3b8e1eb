import { type FieldError } from '@halfdeep/contracts';

/** A refusal that the caller is told in full. Anything else that is thrown becomes a 500 with a plain sentence. */
export class RefusedError extends Error {
  constructor(
    readonly status: number,
    readonly title: string,
    /** A sentence or two: what was wrong, what arrived, what would be right. */
    detail: string,
    readonly errors?: FieldError[],
  ) {
    super(detail);
    this.name = new.target.name;
  }
}

/** 400 when the request cannot be read, 422 when it can but says something impossible. */
export class InputError extends RefusedError {
  constructor(detail: string, errors?: FieldError[], status: 400 | 413 | 415 | 422 = 400) {
    super(status, 'The request is not right', detail, errors);
  }
}
/** 401: nobody is signed in, or the session has ended. */
export class UnauthenticatedError extends RefusedError {
  constructor(detail = 'Nobody is signed in here, or the session has ended. Sign in.') {
    super(401, 'Not signed in', detail);
  }
}
/** 403: known, but not allowed. */
export class ForbiddenError extends RefusedError {
  constructor(detail: string) {
    super(403, 'Not allowed', detail);
  }
}
/** 404 */
export class NotFoundError extends RefusedError {
  constructor(detail: string) {
    super(404, 'Not found', detail);
  }
}
/** 409: the thing is not in a state in which this can be done. */
export class ConflictError extends RefusedError {
  constructor(detail: string) {
    super(409, 'Not possible now', detail);
  }
}
/** 429, with the seconds to wait in `Retry-After`. */
export class TooManyError extends RefusedError {
  constructor(
    detail: string,
    readonly retryAfterS: number,
  ) {
    super(429, 'Too many attempts', detail);
  }
}
