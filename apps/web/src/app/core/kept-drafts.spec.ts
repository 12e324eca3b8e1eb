import { TestBed } from '@angular/core/testing';
import { KeptDrafts, type DraftPlace } from './kept-drafts';

const place: DraftPlace = { personId: 'p', experimentId: 'e', parentRunId: null };

describe('KeptDrafts', () => {
  beforeEach(() => localStorage.clear());

  it('gives back what was kept, for this person and experiment alone', () => {
    const drafts = TestBed.inject(KeptDrafts);
    expect(drafts.save(place, { label: null, content: { a: 1 } })).toBe(true);
    drafts.save({ ...place, parentRunId: 'r' }, { label: 'Strong', content: { a: 2 } });
    drafts.save({ ...place, personId: 'q' }, { label: 'Other', content: { a: 3 } });
    expect(drafts.read(place)).toMatchObject({ label: null, content: { a: 1 } });
    expect(drafts.of('p', 'e').map(({ draft }) => draft.label)).toEqual(expect.arrayContaining([null, 'Strong']));
    expect(drafts.of('p', 'e')).toHaveLength(2);
    drafts.remove(place);
    expect(drafts.read(place)).toBeNull();
  });
  it('takes what cannot be read for nothing', () => {
    localStorage.setItem('halfdeep.draft.p.e.control', '{half');
    expect(TestBed.inject(KeptDrafts).read(place)).toBeNull();
  });
});
