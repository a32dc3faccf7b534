import { Wordmark } from '../ui/Wordmark';
import { WaitingLines } from '../ui/Waiting';

/** Shown until it is known who is here: the binding without its pages. */
export function Opening() {
  return (
    <>
      <header className="border-b border-rule px-5 md:px-6 min-h-13 flex items-center"><Wordmark /></header>
      <div className="px-5 md:pl-54 md:pr-6 pt-24 max-w-[88rem]"><WaitingLines /></div>
    </>
  );
}
