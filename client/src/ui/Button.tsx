import type { ComponentProps } from 'react';
import { Link, type LinkProps } from 'react-router-dom';
import { classNames } from './class-names';

/** main: the one thing this page is for; ruled: others; quiet: inside rows and text; grave: cannot be taken back. */
export type ButtonTone = 'main' | 'ruled' | 'quiet' | 'grave';

const BASE = 'inline-flex items-center justify-center gap-2 font-semibold whitespace-nowrap transition-colors disabled:opacity-55 disabled:cursor-not-allowed';
const BLOCK = 'rounded-edge px-4 min-h-10 text-body';
const TONES: Record<ButtonTone, string> = {
  main: `${BLOCK} bg-ink text-paper hover:bg-soft`,
  ruled: `${BLOCK} border border-rule-field text-ink hover:bg-hover`,
  grave: `${BLOCK} border border-attention-text text-attention-text hover:bg-hover`,
  quiet: 'text-small min-h-6 text-ink underline decoration-1 underline-offset-4 hover:decoration-2',
};

interface Look {
  tone?: ButtonTone;
}

type ButtonProps = ComponentProps<'button'> & Look & {
  /** Work is under way: the button waits, keeps its focus and says so. */
  busy?: boolean;
};

export function Button({ tone = 'ruled', busy = false, className, type = 'button', children, onClick, ...rest }: ButtonProps) {
  return (
    <button
      {...rest}
      type={busy ? 'button' : type}
      aria-disabled={busy || undefined}
      aria-busy={busy || undefined}
      onClick={busy ? undefined : onClick}
      className={classNames(BASE, TONES[tone], busy && 'opacity-60 cursor-progress', className)}
    >
      {children}
    </button>
  );
}

export function ButtonLink({ tone = 'ruled', className, ...rest }: LinkProps & Look) {
  return <Link {...rest} className={classNames(BASE, TONES[tone], className)} />;
}
