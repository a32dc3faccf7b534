import { cableLengths, closure, parseRig, type RigFile } from '@shared/rig';
import { fixed, millimetres } from '../../lib/format';
import { RuledTable } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';

/** Millimetres of a point, as x, y, z. */
const point = (metres: readonly number[]) => metres.map((value) => fixed(value * 1000, 1)).join(', ');

/** The rig file's own name of a body, spaced: jawA is jaw A. */
const bodyWords = (body: string) => body.replace(/([a-z])([A-Z])/g, '$1 $2');

/** Lengths at home and the closure index there; a rig whose home is out of reach has neither. */
function atHome(file: RigFile) {
  try {
    const rig = parseRig(file);
    const pose = { p: file.home.p, q: file.home.q, grasp: file.home.grasp };
    const lengths = cableLengths(rig, pose, new Float64Array(file.cables.length));
    return { lengths, closure: closure(rig, pose) };
  } catch {
    return null;
  }
}

/** Where each cable leaves the frame and where it holds. */
export function CableTable({ file }: { file: RigFile }) {
  const home = atHome(file);
  const rows = file.cables.map((cable, index) => ({ ...cable, number: index + 1, lengthM: home?.lengths[index] ?? Number.NaN }));
  return (
    <div>
      <RuledTable
        caption="Cables"
        rows={rows}
        rowKey={(row) => String(row.number)}
        columns={[
          { key: 'cable', head: 'Cable', width: '3.5rem', cell: (row) => <span className="font-semibold">{row.number}</span> },
          { key: 'exit', head: 'Exit, mm in base', cell: (row) => <span className="text-small">{point(row.exit)}</span> },
          { key: 'attach', head: 'Attached, mm in palm', cell: (row) => <span className="text-small">{point(row.attach)}</span> },
          { key: 'body', head: 'To', width: '4rem', cell: (row) => bodyWords(row.body) },
          { key: 'length', head: 'At home', width: '5rem', align: 'right', cell: (row) => millimetres(row.lengthM, 0) },
        ]}
      />
      {home === null ? null : (
        <p className="text-small text-soft mt-2">
          Closure index at home <span className="text-ink font-semibold">{home.closure.closureIndex === null ? 'none' : fixed(home.closure.closureIndex, 2)}</span>{' '}
          {home.closure.closure ? <StateWord tone="good">every cable can stay taut</StateWord> : <StateWord tone="attention">some cable must go slack here</StateWord>}
        </p>
      )}
    </div>
  );
}
