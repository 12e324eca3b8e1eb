import { type Role } from '@halfdeep/contracts';

/** What can be done through the API, in words that complete "You may not …". Every route names one of these. */
export const ACTIONS = {
  'health.read': 'read the health of the server',
  'api.describe': 'read the description of the API',
  'session.open': 'sign in',
  'session.refresh': 'renew a session',
  'session.close': 'sign out',
  'me.read': 'read your own account',
  'password.forget': 'ask for a new password',
  'password.reset': 'set a new password with a link',
  'invitation.look': 'look at an invitation',
  'invitation.accept': 'accept an invitation',
  'desk.read': 'read the desk',
  'experiment.list': 'list the experiments',
  'experiment.read': 'read an experiment',
  'experiment.create': 'begin an experiment',
  'experiment.edit': 'change an experiment',
  'preset.list': 'list the ready setups',
  'verification.read': 'read the verification report',
  'preflight.run': 'have a setup checked',
  'run.list': 'list the runs',
  'run.read': 'read a run and its results',
  'run.export': 'export the setup or the last state of a run',
  'run.queue': 'queue a run in this experiment',
  'run.stop': 'stop a run',
  'run.resume': 'resume a run',
  'run.extend': 'extend a run',
  'run.repeat': 'repeat a run',
  'run.refine': 'queue a run at other resolutions',
  'run.delete': 'delete a run',
  'run.compare': 'put two runs side by side',
  'events.watch': 'watch what happens',
  'queue.read': 'read the queue',
  'queue.change': 'change the queue',
  'workers.read': 'see the workers',
  'people.list': 'list the people',
  'people.invite': 'invite people',
  'people.change': 'change what a person may do',
  'audit.read': 'read the audit trail',
  'outbox.read': 'read the outbox',
} as const;
export type Action = keyof typeof ACTIONS;

/** [action, who, whose, in which states]: one way in which an action is allowed. */
export type PolicyRow = readonly [
  action: Action,
  who: 'anyone' | 'signed in' | Role,
  whose: 'any' | 'own',
  states: 'any' | readonly string[],
];

/**
 * Who may do what: THE table. An action is allowed when one of its rows fits the person's roles, whose the thing is,
 * and the state it is in. `own` is about the experiment's owner, for runs too. A route whose action has no row does not start.
 */
// prettier-ignore
export const POLICY_TABLE: readonly PolicyRow[] = [
  // Before anybody is signed in.
  ['health.read',       'anyone',    'any', 'any'],
  ['api.describe',      'anyone',    'any', 'any'],
  ['session.open',      'anyone',    'any', 'any'],
  ['session.refresh',   'anyone',    'any', 'any'], // the refresh token says who
  ['session.close',     'anyone',    'any', 'any'], // signing out twice is no mistake
  ['password.forget',   'anyone',    'any', 'any'],
  ['password.reset',    'anyone',    'any', 'any'], // the link says who
  ['invitation.look',   'anyone',    'any', 'any'],
  ['invitation.accept', 'anyone',    'any', 'any'],

  // Reading is for the whole group.
  ['me.read',           'signed in', 'any', 'any'],
  ['desk.read',         'signed in', 'any', 'any'],
  ['experiment.list',   'signed in', 'any', 'any'],
  ['experiment.read',   'signed in', 'any', 'any'],
  ['preset.list',       'signed in', 'any', 'any'],
  ['verification.read', 'signed in', 'any', 'any'],
  ['preflight.run',     'signed in', 'any', 'any'],
  ['run.list',          'signed in', 'any', 'any'],
  ['run.read',          'signed in', 'any', 'any'],
  ['run.compare',       'signed in', 'any', 'any'],
  ['run.export',        'signed in', 'any', 'any'],
  ['events.watch',      'signed in', 'any', 'any'],

  // Doing the work is for modellers, on what is theirs.
  ['experiment.create', 'modeller',  'any', 'any'],
  ['experiment.edit',   'modeller',  'own', 'any'],
  ['run.queue',         'modeller',  'own', 'any'],
  ['run.stop',          'modeller',  'own', ['queued', 'running']],
  ['run.resume',        'modeller',  'own', ['stopped', 'failed']],
  ['run.extend',        'modeller',  'own', ['finished']],
  ['run.repeat',        'modeller',  'own', ['finished', 'stopped', 'failed']],
  ['run.refine',        'modeller',  'own', ['finished']],
  ['run.delete',        'modeller',  'own', ['queued', 'stopped', 'failed', 'finished']],

  // Keeping house is for admins.
  ['run.stop',          'admin',     'any', ['queued', 'running']],
  ['queue.read',        'admin',     'any', 'any'],
  ['queue.change',      'admin',     'any', 'any'],
  ['workers.read',      'admin',     'any', 'any'],
  ['people.list',       'admin',     'any', 'any'],
  ['people.invite',     'admin',     'any', 'any'],
  ['people.change',     'admin',     'any', 'any'],
  ['audit.read',        'admin',     'any', 'any'],
  ['outbox.read',       'admin',     'any', 'any'],
];
