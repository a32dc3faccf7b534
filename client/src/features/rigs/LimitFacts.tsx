import type { RigFile } from '@shared/rig';
import { count, degrees, fixed, millimetres, newtons } from '../../lib/format';
import { Fact, Facts } from '../../ui/Fact';

const graspText = (file: RigFile, value: number) => (file.grasp.kind === 'slide' ? millimetres(value, 1) : degrees(value));

const box = ({ min, max }: RigFile['frame']) => max.map((value, axis) => fixed((value - (min[axis] ?? 0)) * 1000, 0)).join(' × ');

/** What the rig file says beside the cables. */
export function LimitFacts({ file, digest }: { file: RigFile; digest: string }) {
  return (
    <div className="grid gap-x-10 lg:grid-cols-2 max-w-[64rem]">
      <Facts>
        <Fact name="Tension kept by the controller">{newtons(file.tensionMin)} at least</Fact>
        <Fact name="Tension a cable may carry">{newtons(file.tensionMax)} at most</Fact>
        <Fact name="Counts as slack below">{newtons(file.slackBelow)}</Fact>
        <Fact name="Axial stiffness">{count(file.axialStiffness)} N per unit of strain</Fact>
      </Facts>
      <Facts>
        <Fact name="Grasp">{file.grasp.kind === 'slide' ? 'sliding jaws' : 'hinged jaws'}, {graspText(file, file.grasp.min)} to {graspText(file, file.grasp.max)}</Fact>
        <Fact name="Home">{file.home.p.map((value) => fixed(value * 1000, 0)).join(', ')} mm in base, grasp {graspText(file, file.home.grasp)}</Fact>
        <Fact name="Frame">{box(file.frame)} mm</Fact>
        <Fact name="SHA-256 of the file"><span className="text-small break-all">{digest}</span></Fact>
      </Facts>
    </div>
  );
}
