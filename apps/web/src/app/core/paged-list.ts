import { computed, inject, signal } from '@angular/core';
import { toObservable, takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { type Page, pageSchema } from '@halfdeep/contracts';
import { debounceTime, map, skip, tap } from 'rxjs';
import type * as z from 'zod';
import { Api } from './api';
import { Reading } from './reading';

/** A list that the server pages and searches: the shell of every table of that kind. Make it in an injection context. */
export class PagedList<T> {
  private readonly api = inject(Api);
  private readonly at = signal(1);
  private readonly size = signal(20);
  private readonly words = signal('');
  private readonly reading: Reading<Page<T>>;

  readonly page = this.at.asReadonly();
  readonly pageSize = this.size.asReadonly();
  readonly query = this.words.asReadonly();
  readonly items = computed(() => this.reading.value()?.items ?? null);
  readonly total = computed(() => this.reading.value()?.total ?? 0);
  readonly problem = computed(() => this.reading.problem());

  constructor(path: string, item: z.ZodType<T>) {
    const schema = pageSchema(item);
    this.reading = new Reading<Page<T>>(() =>
      this.api.get(path, schema, { page: this.at(), pageSize: this.size(), q: this.words() }).pipe(
        map((page): Page<T> => page),
        // The last page can vanish while one stands on it.
        tap(({ total, pageSize }) => {
          const last = Math.max(1, Math.ceil(total / pageSize));
          if (this.at() > last) this.turnTo(last, pageSize);
        }),
      ),
    );
    toObservable(this.words)
      .pipe(skip(1), debounceTime(250), takeUntilDestroyed())
      .subscribe(() => this.reading.again());
  }

  again(): void {
    this.reading.again();
  }

  turnTo(page: number, pageSize: number): void {
    this.at.set(page);
    this.size.set(pageSize);
    this.reading.again();
  }

  /** Begins again at the first page; reads once the typing pauses. */
  search(words: string): void {
    this.at.set(1);
    this.words.set(words.trim());
  }

  /** Puts a changed item in the place of the old one. */
  replace(changed: T, same: (item: T) => boolean): void {
    this.reading.update((page) => ({ ...page, items: page.items.map((item) => (same(item) ? changed : item)) }));
  }
}
