/** The invented laboratory's people: printed by `npm start`, made by the seed, shown at sign-in. */
export const demoPassword = 'tide-comes-in-twice';

export const demoTeam = 'Tidewater Rhythm Lab';

/** @type {{ email: string; name: string; role: import('../../src/lib/model/role').Role }[]} */
export const demoAccounts = [
  { email: 'lead@tidewater.example', name: 'Nell Harrow', role: 'lead' },
  { email: 'researcher@tidewater.example', name: 'Ida Marlow', role: 'researcher' },
  { email: 'statistician@tidewater.example', name: 'Tomas Vane', role: 'statistician' },
  { email: 'viewer@tidewater.example', name: 'Petra Quill', role: 'viewer' },
];
