import type { SetupChange } from '@halfdeep/ocean';
import { unitGap } from '../../core/format';

/** "was 0.20°": what the parent had where a field differs from it; '' where it does not. */
export function wasText(change: SetupChange | null): string {
  if (!change) return '';
  return `was ${change.from}${change.unit ? unitGap(change.unit) + change.unit : ''}`;
}
