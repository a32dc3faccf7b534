import { useState } from 'react';
import { Button } from './Button';

type Copied = 'no' | 'yes' | 'refused';

/** A text to be carried elsewhere, with a button that copies it and says whether it could. */
export function CopyLine({ label, text }: { label: string; text: string }) {
  const [copied, setCopied] = useState<Copied>('no');
  const copy = async () => {
    try {
      await navigator.clipboard.writeText(text);
      setCopied('yes');
    } catch {
      setCopied('refused');
    }
  };
  return (
    <div>
      <p className="text-small font-semibold">{label}</p>
      <div className="flex flex-wrap items-center gap-x-4 gap-y-2 border-y border-rule py-2 mt-1">
        <code className="font-sans font-semibold break-all flex-1 min-w-48 select-all">{text}</code>
        <Button onClick={() => void copy()}>Copy</Button>
      </div>
      <p role="status" className="text-small text-soft min-h-5">
        {copied === 'yes' ? 'Copied.' : copied === 'refused' ? 'The browser did not allow copying: select the text and copy it by hand.' : ''}
      </p>
    </div>
  );
}
