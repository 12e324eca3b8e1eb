import { MatButton } from '@angular/material/button';
import { ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { RemedyActions } from '../preflight/remedy-actions';
import { SetupDraft } from '../setup-draft';
import { sectionOf, type SectionId } from './section-ids';

/** One section of the form: heading, fields, and behind them the remedies that touch it, in the order of the keyboard. */
@Component({
  selector: 'app-section-frame',
  imports: [MatButton],
  template: `
    <section [id]="section()" [attr.aria-labelledby]="section() + '-head'" tabindex="-1">
      <header>
        <h2 [id]="section() + '-head'">{{ heading() }}</h2>
        @if (remark()) {
          <span>{{ remark() }}</span>
        }
      </header>
      <ng-content />
      @if (remedies().length > 0) {
        <ul class="remedies">
          @for (check of remedies(); track check.id) {
            <li [class.refuse]="check.verdict === 'refuse'">
              <span
                ><b>{{ check.verdict === 'refuse' ? 'Refused' : 'Caution' }}</b> {{ check.label }}:
                {{ check.reason }}</span
              >
              <button mat-stroked-button class="small" type="button" (click)="actions.apply(check)">
                {{ check.remedy?.label }}
              </button>
            </li>
          }
        </ul>
      }
    </section>
  `,
  styleUrl: './section-frame.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class SectionFrame {
  private readonly draft = inject(SetupDraft);
  protected readonly actions = inject(RemedyActions);
  readonly section = input.required<SectionId>();
  readonly heading = input.required<string>();
  readonly remark = input('');
  /** One line for each different remedy: the worst check that asks for it. */
  protected readonly remedies = computed(() => {
    const said = new Set<string>();
    return (this.draft.preflight()?.checks ?? []).filter((check) => {
      const changes = check.verdict === 'pass' ? [] : (check.remedy?.changes ?? []);
      const key = JSON.stringify(changes);
      if (said.has(key) || !changes.some(({ pointer }) => sectionOf(pointer) === this.section())) return false;
      said.add(key);
      return true;
    });
  });
}
