/** Who asks, and what their place in a study is. */
import { fittingStudyRoles, type LabRole, type PersonId, type StudyId, type StudyRole } from '@shared/api/common';

export interface SignedIn {
  readonly id: PersonId;
  readonly name: string;
  readonly email: string;
  readonly role: LabRole;
}

export interface Membership {
  readonly studyId: StudyId;
  readonly role: StudyRole;
  /** Sees condition codes, not labels. */
  readonly blind: boolean;
}

/** What the guard found while it let a caller in. */
export interface Access {
  readonly person: SignedIn | null;
  readonly membership: Membership | null;
}

/**
 * What one is in the lab bounds what one can be in a study. A membership that no longer fits, because the lab role was
 * changed, counts as none.
 */
export const fits = (labRole: LabRole, studyRole: StudyRole): boolean => fittingStudyRoles[labRole].includes(studyRole);
