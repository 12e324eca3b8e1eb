import * as z from 'zod';
import { oneLine } from './one-line';

export const ROLES = ['modeller', 'reviewer', 'admin'] as const;
export const roleSchema = z.enum(ROLES);
export type Role = z.infer<typeof roleSchema>;

export const personRefSchema = z.object({ id: z.uuid(), name: z.string() }).meta({ id: 'PersonRef' });
export type PersonRef = z.infer<typeof personRefSchema>;

const email = z.email('An e-mail address looks like name@place.example.').max(200);
const personName = oneLine(80, 'A name').min(1, 'A name is missing.');
const PART_OF_A_LINK = 'This is not the whole link: open it as it came in the mail.';
const linkToken = z.string().min(20, PART_OF_A_LINK).max(200, PART_OF_A_LINK);
export const MIN_PASSWORD_LENGTH = 12;
export const passwordSchema = z
  .string()
  .min(MIN_PASSWORD_LENGTH, `A password has at least ${MIN_PASSWORD_LENGTH} characters.`)
  // bcrypt reads no more than 72 bytes.
  .refine((text) => new TextEncoder().encode(text).length <= 72, 'A password has at most 72 bytes.');

export const signInSchema = z.strictObject({
  email,
  password: z.string().min(1, 'The password is missing.').max(1000),
});

export const meSchema = z
  .object({
    id: z.uuid(),
    name: z.string(),
    email: z.string(),
    roles: z.array(roleSchema),
    /** True while this is the demonstration database. */
    demonstration: z.boolean(),
  })
  .meta({ id: 'Me' });
export type Me = z.infer<typeof meSchema>;

/** Answer to POST /api/session; accessToken and expiresAt only with ?token=1. */
export const sessionSchema = z
  .object({ me: meSchema, accessToken: z.string().optional(), expiresAt: z.iso.datetime().optional() })
  .meta({ id: 'Session' });
export type Session = z.infer<typeof sessionSchema>;

/** POST /api/password-resets asks for a link by mail: 202 whether or not the address is known. */
export const passwordResetRequestSchema = z.strictObject({ email });
/** POST /api/password-resets/redeem. */
export const passwordResetRedeemSchema = z.strictObject({
  token: linkToken,
  password: passwordSchema,
});
/** POST /api/invitations/look → what the invitation says; POST /api/invitations/redeem accepts it. */
export const invitationLookSchema = z.strictObject({ token: linkToken });
export const invitationRedeemSchema = z.strictObject({
  token: linkToken,
  name: personName,
  password: passwordSchema,
  /** The first admin's own, whose invitation names no address; ignored in every other. */
  email: email.optional(),
});
export const invitationSchema = z
  .object({
    /** Empty in the link that makes the first admin, who then gives one. */
    email: z.string(),
    name: z.string(),
    roles: z.array(roleSchema),
    invitedBy: z.string(),
    expiresAt: z.iso.datetime(),
  })
  .meta({ id: 'Invitation' });
export type Invitation = z.infer<typeof invitationSchema>;

export const personSchema = z
  .object({
    id: z.uuid(),
    name: z.string(),
    email: z.string(),
    roles: z.array(roleSchema),
    state: z.enum(['invited', 'active', 'deactivated']),
    createdAt: z.iso.datetime(),
    lastSeenAt: z.iso.datetime().nullable(),
  })
  .meta({ id: 'Person' });
export type Person = z.infer<typeof personSchema>;

/** POST /api/admin/people invites; the mail carries the link. */
export const inviteSchema = z.strictObject({
  email,
  name: personName,
  roles: z.array(roleSchema).min(1, 'Choose at least one role.'),
});
export const personPatchSchema = z.strictObject({
  roles: z.array(roleSchema).min(1, 'A person keeps at least one role; deactivate the person instead.').optional(),
  active: z.boolean().optional(),
});

export const auditEntrySchema = z
  .object({
    id: z.number().int(),
    at: z.iso.datetime(),
    /** Null: done by the system itself. */
    actor: personRefSchema.nullable(),
    action: z.string(),
    subject: z.string(),
    detail: z.string(),
    address: z.string().nullable(),
  })
  .meta({ id: 'AuditEntry' });
export type AuditEntry = z.infer<typeof auditEntrySchema>;

export const outboxMailSchema = z
  .object({
    id: z.number().int(),
    createdAt: z.iso.datetime(),
    to: z.string(),
    subject: z.string(),
    state: z.enum(['waiting', 'sent', 'failed']),
    attempts: z.number().int(),
    error: z.string().nullable(),
    /** Links and tokens blanked, except in demonstration mode on loopback. */
    body: z.string(),
  })
  .meta({ id: 'OutboxMail' });
export type OutboxMail = z.infer<typeof outboxMailSchema>;
