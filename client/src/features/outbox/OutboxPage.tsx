import { queryOptions, useSuspenseQuery } from '@tanstack/react-query';
import { useSearchParams } from 'react-router-dom';
import { listOutbox, type MailItem } from '@shared/api/people';
import { call } from '../../lib/api';
import { wallTime } from '../../lib/format';
import { classNames } from '../../ui/class-names';
import { Empty } from '../../ui/Empty';
import { Page, Section } from '../../ui/Page';
import { StateWord, type StateTone } from '../../ui/StateWord';
import { MailText } from './MailText';

const outboxQuery = queryOptions({ queryKey: ['outbox'], queryFn: ({ signal }) => call(listOutbox, { signal }), staleTime: 0 });

const STATES: Readonly<Record<MailItem['state'], { word: string; tone: StateTone }>> = {
  outbox: { word: 'kept here', tone: 'plain' },
  sent: { word: 'sent', tone: 'good' },
  failed: { word: 'not sent', tone: 'attention' },
};

export function OutboxPage() {
  const { smtp, mail } = useSuspenseQuery(outboxQuery).data;
  const [search, setSearch] = useSearchParams();
  const open = mail.find((item) => item.id === search.get('mail')) ?? mail[0];
  return (
    <Page title="Mail sent by this book" lead={smtp ? 'Handed to the lab’s mail server' : 'No mail server is set: mail stays here and reaches nobody'}>
      <Section>
        {mail.length === 0 || open === undefined ? <Empty title="No mail yet">Invitations and links to set a new password show here.</Empty> : (
          <div className="grid gap-x-10 gap-y-8 lg:grid-cols-[minmax(0,24rem)_minmax(0,1fr)]">
            <ul className="border-t border-rule-strong" aria-label="Mail, newest first">
              {mail.map((item) => (
                <li key={item.id} className="border-b border-rule">
                  <button
                    type="button"
                    aria-current={item.id === open.id || undefined}
                    onClick={() => setSearch({ mail: item.id }, { replace: true, preventScrollReset: true })}
                    className={classNames('w-full text-left py-2.5 px-3 hover:bg-hover', item.id === open.id && 'bg-sheet [box-shadow:inset_3px_0_0_var(--ink)]')}
                  >
                    <span className="flex justify-between gap-4"><span className="font-semibold">{item.subject}</span><StateWord tone={STATES[item.state].tone}>{STATES[item.state].word}</StateWord></span>
                    <span className="block text-small text-soft break-all">to {item.to}, {wallTime(item.createdAt)}</span>
                  </button>
                </li>
              ))}
            </ul>
            <article aria-label={open.subject} className="bg-sheet border-y border-rule px-5 py-4 min-w-0 self-start">
              <h2>{open.subject}</h2>
              <p className="text-small text-soft mb-4 break-all">to {open.to}, {wallTime(open.createdAt)}</p>
              <MailText text={open.text} />
            </article>
          </div>
        )}
      </Section>
    </Page>
  );
}
