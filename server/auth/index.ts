/** Sign-in and the one place that says who may do what. */
export { hashPassword } from 'better-auth/crypto';
export { createSignIn, invitationDays, type Answered, type SignInDesk } from './sign-in';
export { createGate, type Gate } from './gate';
export { changesAccess, guards, isOpen, may, seesSessions, type Guard, type Via } from './guards';
export { fits, type Access, type Membership, type SignedIn } from './person';
export { writeAudit } from './queries';
