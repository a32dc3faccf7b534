import { WaitingLines } from './Waiting';

/** A page that is being fetched: its frame stands already, so that nothing jumps when the rest comes. */
export function PageWaiting() {
  return (
    <div className="relative flex-1 w-full max-w-[88rem] px-5 md:px-6">
      <div aria-hidden className="margin-rule absolute inset-y-0 left-1.5 md:left-[10.9rem]" />
      <div className="md:ml-[10.75rem] pt-9">
        <div aria-hidden className="waiting-line h-7 w-64 max-w-full" />
        <div aria-hidden className="waiting-line h-3 w-96 max-w-full mt-3 mb-11" />
        <WaitingLines />
      </div>
    </div>
  );
}
