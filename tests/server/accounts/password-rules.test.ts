import { describe, expect, it } from 'vitest';
import { passwordProblem } from '$lib/server/accounts';

const owner = { email: 'ida.marlow@tidewater.example', name: 'Ida Marlow' };
const problem = (password: string) => passwordProblem(password, owner);

describe('passwordProblem', () => {
  it.each(['heron ember lagoon', 'correct-horse-kelp', 'зимний вечер у моря', 'xK9#mQ2$vL7!'])(
    'accepts "%s"',
    (password) => {
      expect(problem(password)).toBeNull();
    },
  );

  it('asks for 12 characters, counted as people count them', () => {
    expect(problem('heron ember')).toMatch(/12 characters/);
    // Six emoji are twelve UTF-16 units and still six characters.
    expect(problem('🐟🐬🦀🐙🦑🐚')).toMatch(/12 characters/);
  });

  it('refuses few different characters', () => {
    expect(problem('abababababab')).toMatch(/different characters/);
  });

  it.each(['idamarlow2024', 'Marlow-Tidewater', 'ida.marlow@tidewater.example', 'TIDEWATER-ida-1'])(
    'refuses "%s", which is made from the name or the mail address',
    (password) => {
      expect(problem(password)).toMatch(/name or mail address/);
    },
  );

  it.each(['password1234', 'Passw0rd2024!', 'qwertyuiop123', '123456789012', 'iloveyou-1234'])(
    'refuses "%s", which is guessed first',
    (password) => {
      expect(problem(password)).toMatch(/guessed first/);
    },
  );
});
