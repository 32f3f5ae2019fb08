import type { PageData } from './$types';

/** A version's body while it is a draft. */
export type DraftBody = Extract<PageData['body'], { state: 'draft' }>;
export type LockedBody = Extract<PageData['body'], { state: 'locked' }>;
