import { Suspense, useEffect } from 'react';
import { NavLink, Link, Outlet, ScrollRestoration, useLocation, useNavigation } from 'react-router-dom';
import type { LabRole } from '@shared/api/common';
import { useMe } from '../lib/me';
import { BarSlots } from '../ui/bar-slots';
import { classNames } from '../ui/class-names';
import { LampMenu } from '../ui/LampMenu';
import { pageTurns } from '../ui/page-turns';
import { PageWaiting } from '../ui/PageWaiting';
import { Wordmark } from '../ui/Wordmark';
import { AccountMenu } from './AccountMenu';
import { LapsedDialog } from './LapsedDialog';

interface Chapter {
  to: string;
  name: string;
  for: readonly LabRole[];
}

const CHAPTERS: readonly Chapter[] = [
  { to: '/', name: 'Today', for: ['administrator', 'lead', 'operator', 'clinician'] },
  { to: '/studies', name: 'Studies', for: ['administrator', 'lead', 'operator', 'clinician'] },
  { to: '/rigs', name: 'Rigs', for: ['administrator', 'lead', 'operator'] },
  { to: '/devices', name: 'Devices', for: ['administrator', 'lead', 'operator'] },
  { to: '/people', name: 'People', for: ['administrator'] },
];

/** The binding: top bar, the page, and what must show over any page. */
export function Shell() {
  const me = useMe();
  const { pathname } = useLocation();
  const turning = useNavigation().state === 'loading';

  useEffect(() => () => pageTurns.mark(), [pathname]);

  return (
    <BarSlots>
      {(slots) => (
        <>
          <a href="#page" className="sr-only focus:not-sr-only focus:absolute focus:z-50 focus:top-2 focus:left-2 focus:bg-ink focus:text-paper focus:px-4 focus:py-2">Skip to the page</a>
          <header className="bar no-print relative border-b border-rule">
            <div className="flex flex-wrap items-center gap-x-7 gap-y-1 px-5 md:px-6 min-h-13 py-2">
              <Link to="/" aria-label="Tautbook, to Today"><Wordmark /></Link>
              <nav aria-label="Chapters" className="bar-chapters max-md:order-last max-md:basis-full">
                <ul className="flex flex-wrap gap-x-5 gap-y-1">
                  {CHAPTERS.filter((chapter) => chapter.for.includes(me.role)).map((chapter) => (
                    <li key={chapter.to}>
                      <NavLink to={chapter.to} end={chapter.to === '/'} className={({ isActive }) => classNames('inline-block py-1 text-small', isActive ? 'font-bold' : 'text-soft hover:text-ink')}>
                        {chapter.name}
                      </NavLink>
                    </li>
                  ))}
                </ul>
              </nav>
              <div ref={slots.crumbs} className="bar-crumbs min-w-0 max-md:order-last max-md:basis-full" />
              <div className="ml-auto flex items-center gap-x-4">
                <div ref={slots.end} className="bar-end" />
                <LampMenu />
                <AccountMenu />
              </div>
            </div>
            {turning ? <div role="progressbar" aria-label="Turning the page" className="waiting-line absolute inset-x-0 -bottom-px h-0.5 bg-ink" /> : null}
          </header>
          <main id="page" tabIndex={-1} className="flex-1 flex flex-col">
            <Suspense key={pathname} fallback={<PageWaiting />}><Outlet /></Suspense>
          </main>
          <LapsedDialog />
          <ScrollRestoration />
        </>
      )}
    </BarSlots>
  );
}
