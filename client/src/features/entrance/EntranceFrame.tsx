import { useEffect } from 'react';
import { Outlet, useLocation } from 'react-router-dom';
import { Caution } from '../../ui/Caution';
import { LampMenu } from '../../ui/LampMenu';
import { pageTurns } from '../../ui/page-turns';
import { Wordmark } from '../../ui/Wordmark';

/** The cover of the book: what it is, and the slip to sign. */
export function EntranceFrame() {
  const { pathname } = useLocation();
  useEffect(() => () => pageTurns.mark(), [pathname]);
  return (
    <>
      <header className="border-b border-rule flex items-center justify-between px-5 md:px-6 min-h-13">
        <Wordmark />
        <LampMenu />
      </header>
      <div className="flex-1 relative px-5 md:px-6">
        <div aria-hidden className="margin-rule absolute inset-y-0 left-1.5 md:left-[10.9rem]" />
        <main id="page" className="md:ml-[10.75rem] max-w-[64rem] pt-12 pb-16 flex flex-col gap-12">
          <Outlet />
          <footer className="mt-auto"><Caution>Stopping the rig and keeping people safe stay with the rig itself and with those in charge of the room.</Caution></footer>
        </main>
      </div>
    </>
  );
}
