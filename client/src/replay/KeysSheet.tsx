import { Dialog } from '../ui/Dialog';
import { CheckField } from '../ui/Field';
import { KeyCap } from '../ui/KeyCap';
import { commands, keyWords, type Command } from './commands';
import { singleKeys, useSingleKeys } from './use-commands';

const groups: readonly Command['group'][] = ['Time', 'Moments', 'Page', 'Span and notes', 'Scene'];

/** All keys of the player, and what the pointer does. */
export function KeysSheet({ onClose, only }: { onClose: () => void; only?: (command: Command) => boolean }) {
  const single = useSingleKeys();
  return (
    <Dialog open onOpenChange={onClose} title="Keys" wide description="They work anywhere on this page while you are not typing.">
      <div className="columns-2 max-sm:columns-1 gap-10">
        {groups.map((group) => {
          const shown = commands.filter((command) => command.group === group && (only?.(command) ?? true));
          if (shown.length === 0) return null;
          return (
            <section key={group} className="break-inside-avoid mb-5">
              <h3 className="text-small">{group}</h3>
              <dl className="border-t border-rule-strong">
                {shown.map((command) => (
                  <div key={command.id} className="flex items-center justify-between gap-4 border-b border-rule py-1">
                    <dt className="text-small">{command.says}</dt>
                    <dd className="flex gap-1 shrink-0">{command.keys.slice(0, 1).map((key) => <KeyCap key={key}>{keyWords(key)}</KeyCap>)}</dd>
                  </div>
                ))}
              </dl>
            </section>
          );
        })}
        <section className="break-inside-avoid mb-5">
          <h3 className="text-small">Pointer on the stave</h3>
          <ul className="border-t border-rule-strong text-small">
            {['click: the reading line goes there', 'drag the line: read along', 'drag the page: leaf', 'Shift and drag, or drag in the notes’ lane: a span', 'wheel or pinch: closer and further about the pointer', 'drag the strip at the foot: move through the whole'].map((line) => (
              <li key={line} className="border-b border-rule py-1">{line}</li>
            ))}
          </ul>
        </section>
      </div>
      <CheckField label="Single letters and signs run commands" help="Off: they do so only while the stave has the focus." checked={single} onChange={(event) => singleKeys.set(event.target.checked)} />
    </Dialog>
  );
}
