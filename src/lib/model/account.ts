import { z } from 'zod';
import { roleSchema } from './role';

export const emailSchema = z
  .string()
  .trim()
  .toLowerCase()
  .min(1, 'Enter a mail address.')
  .max(254, 'A mail address has at most 254 characters.')
  .pipe(z.email('This is no mail address; it needs the form name@place.org.'));

const personNameSchema = z
  .string()
  .trim()
  .min(1, 'Enter your name.')
  .max(120, 'A name has at most 120 characters.');

// Rules that need to know the person are checked on the server (password-rules.ts).
const newPasswordSchema = z
  .string()
  .min(12, 'At least 12 characters; several words are easy to keep in mind.')
  .max(256, 'At most 256 characters.');

export const signInSchema = z.object({
  email: emailSchema,
  password: z.string().min(1, 'Enter your password.').max(256, 'At most 256 characters.'),
  next: z.string().max(2000).default(''),
});

export const resetRequestSchema = z.object({ email: emailSchema });

export const resetSchema = z.object({ password: newPasswordSchema });

export const joinSchema = z.object({ name: personNameSchema, password: newPasswordSchema });

export const nameSchema = z.object({ name: personNameSchema });

export const changePasswordSchema = z.object({
  current: z.string().min(1, 'Enter your present password.').max(256, 'At most 256 characters.'),
  password: newPasswordSchema,
});

export const inviteSchema = z.object({ email: emailSchema, role: roleSchema.default('viewer') });

export const changeRoleSchema = z.object({ personId: z.uuid(), role: roleSchema });

export const memberSchema = z.object({ personId: z.uuid() });

export const invitationSchema = z.object({ invitationId: z.uuid() });
