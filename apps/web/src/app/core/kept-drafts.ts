import { DOCUMENT } from '@angular/common';
import { inject, Injectable } from '@angular/core';

/** A form that was left before it was sent. What the form makes of `content` is its own affair. */
export interface KeptDraft {
  savedAt: string;
  /** Null while the label follows the changes. */
  label: string | null;
  /** The label that stood in the form when it was left, for lists. */
  shown?: string;
  content: unknown;
}

/** Where a draft belongs: whose, in which experiment, from which parent run (null: a control run). */
export interface DraftPlace {
  personId: string;
  experimentId: string;
  parentRunId: string | null;
}

const PREFIX = 'halfdeep.draft.';

/** Keeps unsent setup forms on this machine, one for each person, experiment and parent run. */
@Injectable({ providedIn: 'root' })
export class KeptDrafts {
  private readonly storage = storageOf(inject(DOCUMENT));

  /** False when the browser keeps nothing (full, or forbidden). */
  save(place: DraftPlace, draft: Omit<KeptDraft, 'savedAt'>): boolean {
    try {
      this.storage?.setItem(keyOf(place), JSON.stringify({ ...draft, savedAt: new Date().toISOString() }));
      return this.storage !== null;
    } catch (error) {
      if (error instanceof DOMException) return false;
      throw error;
    }
  }

  /** What was kept, or null when there is nothing or it cannot be read any more. */
  read(place: DraftPlace): KeptDraft | null {
    const text = this.storage?.getItem(keyOf(place)) ?? null;
    if (text === null) return null;
    try {
      const kept = JSON.parse(text) as Partial<KeptDraft> | null;
      if (kept && typeof kept.savedAt === 'string' && 'content' in kept)
        return {
          savedAt: kept.savedAt,
          label: typeof kept.label === 'string' ? kept.label : null,
          shown: typeof kept.shown === 'string' ? kept.shown : '',
          content: kept.content,
        };
    } catch (error) {
      if (!(error instanceof SyntaxError)) throw error;
    }
    return null;
  }

  remove(place: DraftPlace): void {
    this.storage?.removeItem(keyOf(place));
  }

  /** This person's drafts in an experiment. */
  of(personId: string, experimentId: string): { place: DraftPlace; draft: KeptDraft }[] {
    const start = keyOf({ personId, experimentId, parentRunId: null }).slice(0, -'control'.length);
    const keys = Array.from({ length: this.storage?.length ?? 0 }, (_, k) => this.storage?.key(k) ?? '');
    return keys
      .filter((key) => key.startsWith(start))
      .map((key) => key.slice(start.length))
      .flatMap((parent) => {
        const place = { personId, experimentId, parentRunId: parent === 'control' ? null : parent };
        const draft = this.read(place);
        return draft ? [{ place, draft }] : [];
      });
  }
}

function keyOf({ personId, experimentId, parentRunId }: DraftPlace): string {
  return `${PREFIX}${personId}.${experimentId}.${parentRunId ?? 'control'}`;
}

/** A browser may forbid its storage altogether. */
function storageOf(document: Document): Storage | null {
  try {
    return document.defaultView?.localStorage ?? null;
  } catch (error) {
    if (error instanceof DOMException) return null;
    throw error;
  }
}
