/** Who is in the demo lab. Every name and address is made up; the addresses are of a domain that cannot exist. */
import type { LabRole } from '@shared/api/common';

/** The password of every demo sign-in. It exists in the demo lab alone. */
export const demoPassword = 'loose-and-taut-8';

export const cast = {
  administrator: { role: 'administrator', name: 'Maren Tollgrave', email: 'maren.tollgrave@tautbook.example' },
  lead: { role: 'lead', name: 'Tamsin Quillby', email: 'tamsin.quillby@tautbook.example' },
  operator: { role: 'operator', name: 'Jonas Fadenholt', email: 'jonas.fadenholt@tautbook.example' },
  secondOperator: { role: 'operator', name: 'Priya Sundermoor', email: 'priya.sundermoor@tautbook.example' },
  clinician: { role: 'clinician', name: 'Elke Weidenast', email: 'elke.weidenast@tautbook.example' },
} as const satisfies Record<string, { role: LabRole; name: string; email: string }>;

export type CastName = keyof typeof cast;
