import { useQueryClient } from '@tanstack/react-query';
import { useRevalidator } from 'react-router-dom';
import { SignInForm } from '../features/entrance';
import { meQuery, useMe } from '../lib/me';
import { signInLapse, useSignInLapse } from '../lib/sign-in-lapse';
import { Dialog } from '../ui/Dialog';

/** The sign-in ended while a page was open: sign in over it, and everything typed is still there. */
export function LapsedDialog() {
  const me = useMe();
  const lapsed = useSignInLapse();
  const queries = useQueryClient();
  const { revalidate } = useRevalidator();
  const back = async () => {
    // Somebody else signing in here must not see what stood on the page.
    const before = me.id;
    const now = await queries.fetchQuery({ ...meQuery, staleTime: 0 });
    if (now.id !== before) {
      window.location.assign('/');
      return;
    }
    signInLapse.set(false);
    await queries.invalidateQueries();
    // A page that failed because of the sign-in is opened again.
    await revalidate();
  };
  return (
    <Dialog
      open={lapsed}
      onOpenChange={() => undefined}
      holding
      title="Your sign-in has ended"
      description="Nothing you typed is lost: it stands on the page behind. Sign in again, then send it once more."
    >
      <SignInForm email={me.email} onSignedIn={back} />
    </Dialog>
  );
}
