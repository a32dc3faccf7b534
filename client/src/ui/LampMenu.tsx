import { Lamp as LampOn, LampDesk as LampSystem, Moon as LampOff } from 'lucide-react';
import { useState } from 'react';
import { readLamp, setLamp, type Lamp } from '../lib/lamp';
import { Menu, MenuChoice } from './Menu';

const LAMPS = [
  { value: 'on', label: 'Lamp on' },
  { value: 'off', label: 'Lamp off' },
  { value: 'system', label: 'As the computer' },
] as const;

const ICONS = { on: LampOn, off: LampOff, system: LampSystem };

/** Light or dark pages. */
export function LampMenu() {
  const [lamp, keep] = useState(readLamp);
  const Icon = ICONS[lamp];
  const choose = (value: Lamp) => {
    setLamp(value);
    keep(value);
  };
  return (
    <Menu
      label="Reading lamp"
      trigger={(
        <button type="button" aria-label={`Reading lamp: ${LAMPS.find((option) => option.value === lamp)?.label ?? ''}`} className="p-1.5 text-soft hover:text-ink">
          <Icon aria-hidden size={17} strokeWidth={1.8} />
        </button>
      )}
    >
      <MenuChoice label="Reading lamp" value={lamp} options={LAMPS} onChange={choose} />
    </Menu>
  );
}
