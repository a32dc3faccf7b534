import { Dialog as Radix } from 'radix-ui';
import type { ReactNode } from 'react';
import { classNames } from './class-names';

interface DialogProps {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  title: string;
  /** One or two sentences under the title. */
  description?: ReactNode;
  children: ReactNode;
  wide?: boolean;
  /** Only its own buttons close it: for what is shown once. */
  holding?: boolean;
}

/** A slip laid over the page. */
export function Dialog({ open, onOpenChange, title, description, children, wide = false, holding = false }: DialogProps) {
  const keep = holding ? (event: Event) => event.preventDefault() : undefined;
  return (
    <Radix.Root open={open} onOpenChange={onOpenChange}>
      <Radix.Portal>
        <Radix.Overlay className="fixed inset-0 z-50 bg-shade" />
        <Radix.Content
          onEscapeKeyDown={keep}
          onPointerDownOutside={keep}
          onInteractOutside={keep}
          {...(description === undefined ? { 'aria-describedby': undefined } : {})}
          className={classNames(
            'fixed z-50 left-1/2 top-[12vh] -translate-x-1/2 w-[calc(100vw-2rem)] max-h-[80vh] overflow-auto bg-sheet border border-rule-field rounded-edge p-6',
            wide ? 'max-w-[48rem]' : 'max-w-[32rem]',
          )}
        >
          <Radix.Title className="text-heading font-bold">{title}</Radix.Title>
          {description === undefined ? null : <Radix.Description asChild><div className="text-soft mt-1">{description}</div></Radix.Description>}
          <div className="mt-5">{children}</div>
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  );
}

/** The row of buttons that ends a form or a dialog. */
export function Actions({ children }: { children: ReactNode }) {
  return <div className="mt-6 flex flex-wrap items-center gap-3">{children}</div>;
}
