import { useId, type ComponentProps, type ReactNode } from 'react';
import { classNames } from './class-names';

interface Around {
  label: ReactNode;
  /** What to write and why, said before anything goes wrong. */
  help?: ReactNode;
  /** What is wrong with what stands there now. */
  error?: string | undefined;
  /** The label is for screen readers only, where the place makes it plain to the eye. */
  labelHidden?: boolean;
}

const LINE = 'w-full bg-sheet text-ink border-0 border-b border-rule-field px-2.5 placeholder:text-faint focus-visible:border-ink aria-invalid:border-attention aria-invalid:border-b-2';

/** Ties label, help and error to one control. */
function useTied({ help, error, id }: { help?: ReactNode; error?: string | undefined; id?: string | undefined }) {
  const made = useId();
  const control = id ?? made;
  // What is wrong takes the place of the help, which it would say again.
  const describedBy = error ? `${control}-error` : help ? `${control}-help` : '';
  return { control, aria: { id: control, 'aria-describedby': describedBy || undefined, 'aria-invalid': error ? true : undefined } };
}

function Frame({ control, label, help, error, labelHidden = false, children, className }: Around & { control: string; children: ReactNode; className?: string | undefined }) {
  return (
    <div className={classNames('grid content-start gap-1', className)}>
      <label htmlFor={control} className={labelHidden ? 'sr-only' : 'text-small font-semibold'}>{label}</label>
      {children}
      {help && !error ? <p id={`${control}-help`} className="text-small text-soft">{help}</p> : null}
      {error ? <p id={`${control}-error`} className="text-small font-semibold text-attention-text">{error}</p> : null}
    </div>
  );
}

export function TextField({ label, help, error, labelHidden, className, id, ...rest }: ComponentProps<'input'> & Around) {
  const { control, aria } = useTied({ help, error, id });
  return (
    <Frame {...{ control, label, help, error, labelHidden, className }}>
      <input {...rest} {...aria} className={classNames(LINE, 'h-10')} />
    </Frame>
  );
}

export function TextArea({ label, help, error, labelHidden, className, id, rows = 4, ...rest }: ComponentProps<'textarea'> & Around) {
  const { control, aria } = useTied({ help, error, id });
  return (
    <Frame {...{ control, label, help, error, labelHidden, className }}>
      <textarea {...rest} {...aria} rows={rows} className={classNames(LINE, 'py-2 resize-y')} />
    </Frame>
  );
}

export function SelectField({ label, help, error, labelHidden, className, id, children, ...rest }: ComponentProps<'select'> & Around) {
  const { control, aria } = useTied({ help, error, id });
  return (
    <Frame {...{ control, label, help, error, labelHidden, className }}>
      <select {...rest} {...aria} className={classNames(LINE, 'h-10')}>{children}</select>
    </Frame>
  );
}

export function CheckField({ label, help, error, className, id, ...rest }: ComponentProps<'input'> & Omit<Around, 'labelHidden'>) {
  const { control, aria } = useTied({ help, error, id });
  return (
    <div className={classNames('grid grid-cols-[auto_1fr] gap-x-2.5', className)}>
      <input {...rest} {...aria} type="checkbox" className="size-4.5 mt-0.5 accent-ink" />
      <label htmlFor={control} className="text-body">{label}</label>
      {help && !error ? <p id={`${control}-help`} className="col-start-2 text-small text-soft">{help}</p> : null}
      {error ? <p id={`${control}-error`} className="col-start-2 text-small font-semibold text-attention-text">{error}</p> : null}
    </div>
  );
}
