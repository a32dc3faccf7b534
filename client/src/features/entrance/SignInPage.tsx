import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { Link, Navigate, useNavigate, useSearchParams } from 'react-router-dom';
import { signIn } from '../../lib/auth';
import { entranceQuery } from '../../lib/me';
import { ROLE_WORDS } from '../../lib/words';
import { Button } from '../../ui/Button';
import { PageTitle } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { Cover } from './Cover';
import { SignInForm } from './SignInForm';

/** Only an address inside this book: anything else leads to Today. */
const inside = (to: string | null) => (to !== null && /^\/(?![/\\])/.test(to) ? to : '/');

export function SignInPage() {
  const [search] = useSearchParams();
  const navigate = useNavigate();
  const queries = useQueryClient();
  const entrance = useQuery(entranceQuery);
  const onSignedIn = async () => {
    // Nothing that another person saw in this tab may show to the next.
    queries.clear();
    await navigate(inside(search.get('to')), { replace: true });
  };
  if (entrance.data?.setupNeeded) return <Navigate to="/setup" replace />;
  return (
    <>
      <title>Sign in · Tautbook</title>
      <div className="grid md:grid-cols-[minmax(0,24rem)_1fr] gap-x-16 gap-y-10">
        <div>
          <PageTitle>Sign in</PageTitle>
          <p className="text-soft mt-1 mb-6">The logbook of this lab’s cable-driven rigs: sessions, recordings, and what people wrote about them.</p>
          {search.get('reset') === 'done' ? <p role="status" className="mb-4 font-semibold text-confirmed-text">The new password holds. Sign in with it.</p> : null}
          <SignInForm onSignedIn={onSignedIn} />
          <p className="mt-5 text-small text-soft"><Link to="/forgot" className="link">Forgot the password</Link>. New here? The lab’s administrator sends invitations.</p>
          {entrance.isError ? <ProblemNote className="mt-6" error={entrance.error} onRetry={() => void entrance.refetch()} /> : null}
        </div>
        <div className="grid content-start gap-10">
          <Cover />
          {entrance.data && entrance.data.demo.length > 0 ? <DemoSignIns entries={entrance.data.demo} onSignedIn={onSignedIn} /> : null}
        </div>
      </div>
    </>
  );
}

interface DemoSignInsProps {
  entries: readonly { role: keyof typeof ROLE_WORDS; name: string; email: string; password: string }[];
  onSignedIn: () => Promise<void>;
}

/** The demo lab has one sign-in a role; they are on the server's console too. */
function DemoSignIns({ entries, onSignedIn }: DemoSignInsProps) {
  const enter = useMutation({ mutationFn: ({ email, password }: { email: string; password: string }) => signIn(email, password), onSuccess: onSignedIn });
  return (
    <section aria-labelledby="demo-lab">
      <h2 id="demo-lab">Demo lab</h2>
      <p className="text-small text-soft mb-2">Invented people and participants; recordings made by a simulated rig.</p>
      <ul className="border-t border-rule-strong">
        {entries.map((entry) => (
          <li key={entry.email} className="border-b border-rule py-2.5 flex items-baseline justify-between gap-x-5">
            <span className="min-w-0"><span className="font-semibold">{entry.name}</span> <span className="text-small text-soft">{ROLE_WORDS[entry.role]}<span className="max-sm:hidden">, </span><span className="max-sm:block break-words">{entry.email}</span></span></span>
            <Button tone="quiet" busy={enter.isPending} about={`as ${entry.name}, ${ROLE_WORDS[entry.role]}`} onClick={() => enter.mutate(entry)}>Sign in</Button>
          </li>
        ))}
      </ul>
      <ProblemNote className="mt-3" error={enter.error} />
    </section>
  );
}
