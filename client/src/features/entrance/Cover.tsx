/**
 * Strings of a rig as the book draws them: taut, one slack, one at its limit. Ornament only, so nothing of it is read out.
 */
export function Cover() {
  return (
    <svg viewBox="0 0 420 220" aria-hidden className="w-full max-w-[30rem] max-md:hidden">
      {[14, 46, 110, 142, 206].map((y, index) => (
        <path key={y} d={`M0 ${y}H420`} stroke="var(--string)" strokeWidth={[3, 5, 4, 2.5, 4.5][index]} />
      ))}
      <path d="M0 78H150M262 78H420" stroke="var(--string)" strokeWidth="2" />
      <path d="M152 78c22 24 86 24 108 0" fill="none" stroke="var(--slack)" strokeWidth="2.4" strokeDasharray="6 4" />
      <path d="M0 174H228M318 174H420" stroke="var(--string)" strokeWidth="6" />
      <path d="M230 174H316" stroke="var(--saturated)" strokeWidth="13" />
      <path d="M229 163V185M317 163V185" stroke="var(--saturated)" strokeWidth="2.4" />
    </svg>
  );
}
