import { z } from 'zod';

export const themes = ['light', 'dark', 'system'] as const;
export const themeSchema = z.enum(themes);
export type Theme = z.infer<typeof themeSchema>;
