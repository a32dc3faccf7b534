/** A key of the keyboard, as printed on it. */
export function KeyCap({ children }: { children: string }) {
  return <kbd className="inline-flex items-center justify-center min-w-5.5 h-5.5 px-1 border border-ink rounded-[4px] text-fine font-bold font-sans">{children}</kbd>;
}
