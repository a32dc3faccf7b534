import type { ComponentProps } from 'react';
import { Link, type LinkProps } from 'react-router-dom';
import { classNames } from './class-names';

/** main: the one thing this page is for; ruled: others; quiet: inside rows and text; faint: there too, for what is seldom done; grave: cannot be taken back. */
export type ButtonTone = 'main' | 'ruled' | 'quiet' | 'faint' | 'grave';

const BASE = 'inline-flex items-center justify-center gap-2 whitespace-nowrap transition-colors disabled:opacity-55 disabled:cursor-not-allowed';
const BLOCK = 'rounded-edge px-4 min-h-10 text-body font-semibold';
const TONES: Record<ButtonTone, string> = {
  main: `${BLOCK} bg-ink text-paper hover:bg-soft`,
  ruled: `${BLOCK} border border-rule-field text-ink hover:bg-hover`,
  grave: `${BLOCK} border border-attention-text text-attention-text hover:bg-hover`,
  faint: 'text-small min-h-6 font-normal text-soft hover:text-ink underline decoration-1 decoration-rule-field underline-offset-4',
  quiet: 'text-small min-h-6 font-semibold text-ink underline decoration-1 underline-offset-4 hover:decoration-2',
};

interface Look {
  tone?: ButtonTone;
}

type ButtonProps = ComponentProps<'button'> & Look & {
  /** Work is under way: the button waits, keeps its focus and says so. */
  busy?: boolean;
  /** What the word on it is about, for whoever does not see the row it stands in. */
  about?: string;
};

export function Button({ tone = 'ruled', busy = false, about, className, type = 'button', children, onClick, ...rest }: ButtonProps) {
  return (
    <button
      {...rest}
      type={busy ? 'button' : type}
      aria-disabled={busy || undefined}
      aria-busy={busy || undefined}
      onClick={busy ? undefined : onClick}
      className={classNames(BASE, TONES[tone], busy && 'opacity-60 cursor-progress', className)}
    >
      {about === undefined ? children : <span>{children}<span className="sr-only"> {about}</span></span>}
    </button>
  );
}

export function ButtonLink({ tone = 'ruled', className, ...rest }: LinkProps & Look) {
  return <Link {...rest} className={classNames(BASE, TONES[tone], className)} />;
}
