import { ROLES, type Role } from '@halfdeep/contracts';
import { type Person } from '@halfdeep/store';

/** The roles of a person read with `include: 'roleRows'`, always in the same order. */
export const rolesOf = (person: Person): Role[] =>
  ROLES.filter((role) => person.roleRows?.some((row) => row.role === role));
