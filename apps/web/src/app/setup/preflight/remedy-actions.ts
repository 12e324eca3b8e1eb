import { LiveAnnouncer } from '@angular/cdk/a11y';
import { inject, Injectable } from '@angular/core';
import { fieldLabel, type Check } from '@halfdeep/ocean';
import { writeDecimal } from '../../shared/quantity-field/decimal-text';
import { SetupDraft } from '../setup-draft';

/** Writes remedies into the form and says politely what was written; the focus stays where it is. */
@Injectable()
export class RemedyActions {
  private readonly draft = inject(SetupDraft);
  private readonly announcer = inject(LiveAnnouncer);

  apply(check: Check): void {
    const { remedy } = check;
    if (!remedy) return;
    const done = this.draft.apply(remedy);
    const written = remedy.changes.map(({ pointer, value }) => `${fieldLabel(pointer)} is now ${spoken(value)}`);
    const sentence = done ? `${remedy.label}: ${written.join(', ')}.` : `“${remedy.label}” no longer fits this setup.`;
    void this.announcer.announce(sentence, 'polite');
  }
}

function spoken(value: unknown): string {
  if (typeof value === 'number') return writeDecimal(value);
  return typeof value === 'string' ? value : JSON.stringify(value);
}
