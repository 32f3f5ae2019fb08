import { describe, expect, it } from 'vitest';
import { roles } from '$lib/model/role';
import { may } from '$lib/server/access';
import { actions, type Action } from '$lib/server/access/permissions';

// Written out by hand from the roles' words in the design, so that no change goes unseen.
const everybody: Action[] = [
  'team.read',
  'study.read',
  'recording.read',
  'contrast.read',
  'result.read',
];
const allowed = {
  viewer: everybody,
  statistician: [...everybody, 'recording.download'],
  researcher: [
    ...everybody,
    'recording.download',
    'study.write',
    'recording.write',
    'contrast.write',
    'plan.lock',
    'run.write',
  ],
  lead: [...actions],
};

describe('may', () => {
  it.each(roles)('lets a %s do exactly what the role is for', (role) => {
    const granted = actions.filter((action) => may(role, action));
    expect(granted.toSorted()).toEqual(allowed[role].toSorted());
  });

  it('leaves members, roles and invitations to the lead alone', () => {
    expect(roles.filter((role) => may(role, 'team.manage'))).toEqual(['lead']);
  });
});
