import { z } from 'zod';
import { participantCodePattern, participantCodeRule } from './participant';

/** The form for a study, new or changed. */
export const studySchema = z.object({
  name: z
    .string()
    .trim()
    .min(1, 'Give the study a name.')
    .max(120, 'The name has more than 120 characters. Shorten it.'),
  description: z
    .string()
    .trim()
    .max(2000, 'The description has more than 2,000 characters. Shorten it.'),
});

/** The form for a new contrast: everything else is said on its Define page. */
export const contrastSchema = z.object({
  name: z
    .string()
    .trim()
    .min(1, 'Give the contrast a name, for example "Cued against free tapping".')
    .max(120, 'The name has more than 120 characters. Shorten it.'),
  question: z
    .string()
    .trim()
    .min(1, 'Say in words what is asked.')
    .max(2000, 'The question has more than 2,000 characters. Shorten it.'),
});

export const participantSchema = z.object({
  code: z.string().trim().regex(participantCodePattern, participantCodeRule),
});
