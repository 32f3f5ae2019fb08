export { acceptAsNew, acceptAsPerson } from './accept';
export { findInvitation, listInvitations } from './find';
export { invitationDays, invite, resendInvitation, revokeInvitation } from './send';
