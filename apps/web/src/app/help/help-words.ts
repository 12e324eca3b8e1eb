/** What the words on the screens mean, in the order in which one meets them. */
export const HELP_WORDS: readonly { word: string; meaning: string }[] = [
  { word: 'experiment', meaning: 'A question, the runs that answer it, and what was concluded from them.' },
  {
    word: 'setup',
    meaning:
      'Everything that determines a run: basin, layer, wind, start, friction, grid, step, length, output. It never changes once the run is queued.',
  },
  { word: 'control run', meaning: 'The reference of an experiment.' },
  {
    word: 'sensitivity run',
    meaning: 'A run that differs from another one in stated ways; those ways are its caption.',
  },
  { word: 'descent', meaning: 'Which run was made from which, told by what each changes.' },
  {
    word: 'preflight',
    meaning: 'The checks before a run may be queued: what passes, what asks for caution, what is refused.',
  },
  {
    word: 'sketch',
    meaning: 'A coarse version of a setup, integrated in the browser while the form is open, and kept nowhere.',
  },
  {
    word: 'sponge',
    meaning: 'A layer along an edge in which currents and interface are damped alike, so that waves do not come back.',
  },
  {
    word: 'entrainment',
    meaning: 'Water that a thin layer takes up from below, so that it does not run dry; what it adds is accounted for.',
  },
  { word: 'run', meaning: 'One integration of one setup.' },
  {
    word: 'resume',
    meaning: 'Go on with a stopped run of the same setup, to the same bits as if it had never stopped.',
  },
  { word: 'extend', meaning: 'A new run that begins with the last state of a finished one and keeps its model time.' },
  { word: 'frame', meaning: 'The maps of one moment.' },
  { word: 'section', meaning: 'A line along a latitude or longitude on which transports are kept.' },
  { word: 'mooring', meaning: 'A grid point whose series is kept at high frequency.' },
  { word: 'plate', meaning: 'A figure with its caption, and the words that save it as a picture or as numbers.' },
  { word: 'season', meaning: 'The part of the wind that repeats yearly. Its strength is a factor on that part alone.' },
  { word: 'spin-up', meaning: 'The time until the seasonal cycle repeats.' },
  { word: 'model year', meaning: '365 days; day 0 is 1 January, 00:00.' },
  {
    word: 'fingerprint',
    meaning:
      'SHA-256 over u, v and thickness of the last step. Two runs of one setup on one core version have the same, whatever the number of threads, interrupted or not.',
  },
  { word: 'evidence', meaning: 'What a reader needs to trust a run: budgets, repetition, resolution, theory.' },
];
