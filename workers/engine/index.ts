/** The engine's public face: what the pages, the server and the headless runner may import. */
export * from './types';
export { engineVersion } from './version';
export { planLimits, planSchema, type Plan, type Rule } from './plan';
