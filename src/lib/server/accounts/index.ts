export { demoSignIn } from './demo';
export { waitMessage, countAttempt } from './limits';
export { chooseTeam } from './memberships';
export { nextPath } from './next-path';
export {
  countResetRequest,
  findReset,
  mailResetLink,
  resetHours,
  resetPassword,
} from './password-reset';
export { passwordProblem } from './password-rules';
export { hashPassword } from './passwords';
export { changePassword, createPerson, renamePerson, type Outcome } from './people';
export { countOtherSessions, endSession, revokeSessions, startSession } from './sessions';
export { checkSignIn } from './sign-in';
export { hashToken, newToken } from './tokens';
