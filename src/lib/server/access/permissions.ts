import type { Role } from '$lib/model/role';

/** Everything that can be done to a team's things, as `noun.verb`. */
export const actions = [
  'team.read',
  'team.manage',
  'study.read',
  'study.write',
  'recording.read',
  'recording.download',
  'recording.write',
  'contrast.read',
  'contrast.write',
  'plan.lock',
  'run.write',
  'result.read',
] as const;

export type Action = (typeof actions)[number];

const viewer: Action[] = [
  'team.read',
  'study.read',
  'recording.read',
  'contrast.read',
  'result.read',
];
const statistician: Action[] = [...viewer, 'recording.download'];
const researcher: Action[] = [
  ...statistician,
  'study.write',
  'recording.write',
  'contrast.write',
  'plan.lock',
  'run.write',
];

const granted: Record<Role, ReadonlySet<Action>> = {
  viewer: new Set(viewer),
  statistician: new Set(statistician),
  researcher: new Set(researcher),
  lead: new Set(actions),
};

/** May a member with this role do this to what belongs to the member's own team? */
export function may(role: Role, action: Action): boolean {
  return granted[role].has(action);
}
