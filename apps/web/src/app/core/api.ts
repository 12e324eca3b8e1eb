import { HttpClient, HttpHeaders } from '@angular/common/http';
import { Injectable, inject } from '@angular/core';
import { type Observable, catchError, map, throwError } from 'rxjs';
import type * as z from 'zod';
import { toApiProblem } from './problem';

export type Query = Record<string, string | number | boolean | null | undefined>;
interface Sending {
  query?: Query;
  /** For what a nervous finger may send twice: the server carries it out once. */
  idempotencyKey?: string;
}

/**
 * The API, typed: every answer is parsed with its schema of libs/contracts, every error arrives as `ApiProblem`.
 * Paths are absolute ("/api/desk"); a query value of null or undefined or "" is left out.
 */
@Injectable({ providedIn: 'root' })
export class Api {
  private readonly http = inject(HttpClient);

  get<T>(path: string, schema: z.ZodType<T>, query: Query = {}): Observable<T> {
    return this.http.get<unknown>(path, { params: kept(query) }).pipe(parsedBy(schema));
  }

  /** A binary slice; `core/slices` reads its head. */
  bytes(path: string, query: Query = {}): Observable<ArrayBuffer> {
    return this.http
      .get(path, { params: kept(query), responseType: 'arraybuffer' })
      .pipe(catchError((error: unknown) => throwError(() => toApiProblem(error))));
  }

  post<T>(path: string, body: unknown, schema: z.ZodType<T>, sending: Sending = {}): Observable<T> {
    return this.http.post<unknown>(path, body, optionsOf(sending)).pipe(parsedBy(schema));
  }

  patch<T>(path: string, body: unknown, schema: z.ZodType<T>, sending: Sending = {}): Observable<T> {
    return this.http.patch<unknown>(path, body, optionsOf(sending)).pipe(parsedBy(schema));
  }

  /** For requests whose answer says nothing more than that it was done. */
  send(
    method: 'POST' | 'PATCH' | 'DELETE',
    path: string,
    body: unknown = null,
    sending: Sending = {},
  ): Observable<void> {
    return this.http.request(method, path, { body, ...optionsOf(sending), responseType: 'text' }).pipe(
      map(() => undefined),
      catchError((error: unknown) => throwError(() => toApiProblem(error))),
    );
  }
}

/** A key for `idempotencyKey`; works without a secure context too. */
export function newIdempotencyKey(): string {
  return Array.from(crypto.getRandomValues(new Uint8Array(16)), (byte) => byte.toString(16).padStart(2, '0')).join('');
}

function parsedBy<T>(schema: z.ZodType<T>) {
  return (answers: Observable<unknown>): Observable<T> =>
    answers.pipe(
      map((answer) => schema.parse(answer)),
      catchError((error: unknown) => throwError(() => toApiProblem(error))),
    );
}

function optionsOf(sending: Sending) {
  const headers = sending.idempotencyKey
    ? new HttpHeaders({ 'Idempotency-Key': sending.idempotencyKey })
    : new HttpHeaders();
  return { headers, params: kept(sending.query ?? {}) };
}

type Kept = Record<string, string | number | boolean>;
function kept(query: Query): Kept {
  const entries = Object.entries(query).filter(([, value]) => value !== null && value !== undefined && value !== '');
  return Object.fromEntries(entries) as Kept;
}
