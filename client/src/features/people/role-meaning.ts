import type { LabRole } from '@shared/api/common';

export const ROLE_MEANING: Readonly<Record<LabRole, string>> = {
  administrator: 'Looks after people, devices, rigs, the audit trail and the installation.',
  lead: 'Starts studies, imports rigs, and leads the studies they start.',
  operator: 'Plans and runs sessions in the studies they are a member of.',
  clinician: 'Reads released summaries in the studies they are a member of.',
};
