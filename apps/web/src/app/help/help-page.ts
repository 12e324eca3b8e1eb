import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink } from '@angular/router';
import { CAUTION } from '@halfdeep/contracts';
import { HELP_WORDS } from './help-words';
import { VerificationReportView } from './verification-report';

/** What the words mean, what is solved, what it is not for, and what proves it. */
@Component({
  selector: 'app-help-page',
  imports: [RouterLink, VerificationReportView],
  templateUrl: './help-page.html',
  styleUrl: './help-page.scss',
  changeDetection: ChangeDetectionStrategy.OnPush,
})
export class HelpPage {
  protected readonly words = HELP_WORDS;
  protected readonly caution = CAUTION;
  protected readonly parts = [
    { id: 'words', title: 'Words' },
    { id: 'equations', title: 'Equations' },
    { id: 'caution', title: 'Caution' },
    { id: 'verification', title: 'Verification' },
  ];
}
