import { classNames } from '../../ui/class-names';
import { cameraNames, cameraWords, type CameraName } from './cameras';

interface CameraChoiceProps {
  camera: CameraName;
  onChange: (camera: CameraName) => void;
  offered?: readonly CameraName[];
}

/** Where to look from, in the corner of the scene. */
export function CameraChoice({ camera, onChange, offered = cameraNames }: CameraChoiceProps) {
  return (
    <div role="group" aria-label="Look from" className="absolute left-0 bottom-0 px-6 pb-3 flex gap-x-4 max-sm:px-5">
      {offered.map((name) => (
        <button
          key={name}
          type="button"
          aria-pressed={name === camera}
          onClick={() => onChange(name)}
          className={classNames('text-small py-1 min-h-6', name === camera ? 'font-bold border-b-2 border-ink' : 'text-soft hover:text-ink border-b-2 border-transparent')}
        >
          {cameraWords[name]}
        </button>
      ))}
    </div>
  );
}
