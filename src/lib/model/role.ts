import { z } from 'zod';

export const roles = ['lead', 'researcher', 'statistician', 'viewer'] as const;
export const roleSchema = z.enum(roles);
export type Role = z.infer<typeof roleSchema>;
