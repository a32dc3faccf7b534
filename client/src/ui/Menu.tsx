import { DropdownMenu } from 'radix-ui';
import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';

const ITEM = 'block px-3 py-1.5 rounded-edge text-body outline-none data-[highlighted]:bg-hover';

/** A short list that opens under its button. */
export function Menu({ trigger, label, children }: { trigger: ReactNode; label: string; children: ReactNode }) {
  return (
    <DropdownMenu.Root modal={false}>
      <DropdownMenu.Trigger asChild>{trigger}</DropdownMenu.Trigger>
      <DropdownMenu.Portal>
        <DropdownMenu.Content aria-label={label} align="end" sideOffset={8} className="z-40 min-w-52 bg-sheet border border-rule-field rounded-edge p-1.5">
          {children}
        </DropdownMenu.Content>
      </DropdownMenu.Portal>
    </DropdownMenu.Root>
  );
}

export function MenuItem({ onSelect, children }: { onSelect: () => void; children: ReactNode }) {
  return <DropdownMenu.Item onSelect={onSelect} className={ITEM}>{children}</DropdownMenu.Item>;
}

export function MenuLink({ to, children }: { to: string; children: ReactNode }) {
  return <DropdownMenu.Item asChild><Link to={to} className={ITEM}>{children}</Link></DropdownMenu.Item>;
}

interface MenuChoiceProps<Value extends string> {
  label: string;
  value: Value;
  options: readonly { value: Value; label: string }[];
  onChange: (value: Value) => void;
}

/** One choice out of a few, marked by a tick beside the word. */
export function MenuChoice<Value extends string>({ label, value, options, onChange }: MenuChoiceProps<Value>) {
  const take = (chosen: string) => {
    const option = options.find((candidate) => candidate.value === chosen);
    if (option) onChange(option.value);
  };
  return (
    <DropdownMenu.RadioGroup value={value} onValueChange={take} aria-label={label}>
      <DropdownMenu.Label className="px-3 pt-1 text-small text-soft">{label}</DropdownMenu.Label>
      {options.map((option) => (
        <DropdownMenu.RadioItem key={option.value} value={option.value} className={`${ITEM} flex justify-between gap-6`}>
          {option.label}
          <DropdownMenu.ItemIndicator aria-hidden>✓</DropdownMenu.ItemIndicator>
        </DropdownMenu.RadioItem>
      ))}
    </DropdownMenu.RadioGroup>
  );
}

export const MenuRule = () => <DropdownMenu.Separator className="my-1.5 border-t border-rule" />;
