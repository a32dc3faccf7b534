/** Heron as it was before its pulleys were measured again: revision 1 of the demo lab. Revision 2 is the sample file itself. */
import type { RigFile } from '@shared/rig';

/** Two exits as they were written down first, m off in base axes. */
const off: Readonly<Record<number, readonly [number, number, number]>> = { 1: [0.0005, -0.0004, 0.0006], 5: [-0.0006, 0.0003, 0.0005] };

export function heronAtFirst(file: RigFile): RigFile {
  return {
    ...file,
    cables: file.cables.map((cable, i) => {
      const [x, y, z] = off[i] ?? [0, 0, 0];
      const moved = (value: number, by: number) => Math.round((value + by) * 1e6) / 1e6;
      return { ...cable, exit: [moved(cable.exit[0], x), moved(cable.exit[1], y), moved(cable.exit[2], z)] };
    }),
  };
}
