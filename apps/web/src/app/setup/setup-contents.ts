import { DOCUMENT, ViewportScroller } from '@angular/common';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  inject,
  signal,
  afterNextRender,
} from '@angular/core';
import { RouterLink } from '@angular/router';
import type { Verdict } from '@halfdeep/ocean';
import { VerdictSign } from '../shared/verdict/verdict';
import { SECTIONS, sectionOf, type SectionId } from './sections/section-ids';
import { placesOf, SetupDraft } from './setup-draft';

/** The sections of the form in the margin, inked where one is, with the sign of what is refused or doubtful in each. */
@Component({
  selector: 'app-setup-contents',
  imports: [RouterLink, VerdictSign],
  template: `
    <nav class="contents" aria-label="Sections of the setup">
      @for (section of signs(); track section.id) {
        <a
          [routerLink]="[]"
          [fragment]="section.id"
          queryParamsHandling="preserve"
          [attr.aria-current]="here() === section.id ? 'true' : null"
          (click)="enter(section.id)"
        >
          <span>{{ section.title }}</span>
          @if (section.verdict !== 'pass') {
            <app-verdict [verdict]="section.verdict" [text]="section.words" />
          }
        </a>
      }
    </nav>
  `,
  styles: `
    .contents a {
      display: flex;
      gap: 8px;
      align-items: center;
      justify-content: space-between;
    }
    /* The sign stands for itself here; its word is for those who cannot see it. */
    app-verdict ::ng-deep span {
      position: absolute;
      width: 1px;
      height: 1px;
      overflow: hidden;
      clip-path: inset(50%);
    }
  `,
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SetupContents {
  private readonly draft = inject(SetupDraft);
  private readonly document = inject(DOCUMENT);
  protected readonly here = signal<SectionId>('basin');

  protected readonly signs = computed(() => {
    const found = new Map<SectionId, { refuse: number; caution: number }>();
    const count = (pointers: readonly string[], verdict: Verdict) => {
      if (verdict === 'pass') return;
      for (const id of new Set(pointers.map(sectionOf))) {
        if (id === null) continue;
        const counts = found.get(id) ?? { refuse: 0, caution: 0 };
        counts[verdict] += 1;
        found.set(id, counts);
      }
    };
    for (const pointer of this.draft.problems().keys()) count([pointer], 'refuse');
    for (const check of this.draft.preflight()?.checks ?? []) count(placesOf(check), check.verdict);
    return SECTIONS.map(({ id, title }) => {
      const { refuse, caution } = found.get(id) ?? { refuse: 0, caution: 0 };
      const verdict: Verdict = refuse > 0 ? 'refuse' : caution > 0 ? 'caution' : 'pass';
      const words = refuse > 0 ? `${refuse} refused` : `${caution} to mind`;
      return { id, title, verdict, words };
    });
  });

  constructor() {
    const destroyed = inject(DestroyRef);
    // The head covers the top of the page; the router's jump to a section stops below it.
    const scroller = inject(ViewportScroller);
    scroller.setOffset([0, 60]);
    destroyed.onDestroy(() => scroller.setOffset([0, 0]));
    afterNextRender(() => {
      if (typeof IntersectionObserver === 'undefined') return;
      const observer = new IntersectionObserver(
        (entries) => {
          const top = entries.filter((entry) => entry.isIntersecting).at(0);
          if (top) this.here.set(top.target.id as SectionId);
        },
        { rootMargin: '-80px 0px -70% 0px' },
      );
      for (const { id } of SECTIONS) {
        const section = this.document.getElementById(id);
        if (section) observer.observe(section);
      }
      destroyed.onDestroy(() => observer.disconnect());
    });
  }

  /** The heading takes the focus, so that the next Tab lands in the section. */
  protected enter(id: SectionId): void {
    this.here.set(id);
    this.document.getElementById(id)?.focus({ preventScroll: true });
  }
}
