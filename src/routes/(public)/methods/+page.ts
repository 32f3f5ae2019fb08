import type { PageLoad } from './$types';

export const load: PageLoad = () => ({ meta: { title: 'Methods' } });
