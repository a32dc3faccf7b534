/** "Ines Marek" -> "IM". */
export function initials(personName: string): string {
  const parts = personName.split(/[\s.]+/).filter((part) => part !== '');
  const first = parts[0]?.[0] ?? '?';
  const last = parts.length > 1 ? (parts.at(-1)?.[0] ?? '') : '';
  return (first + last).toUpperCase();
}
