import { useMutation, useQueryClient } from '@tanstack/react-query';
import { ChevronDown } from 'lucide-react';
import { useNavigate } from 'react-router-dom';
import { signOut } from '../lib/auth';
import { useMe } from '../lib/me';
import { ROLE_WORDS } from '../lib/words';
import { Menu, MenuItem, MenuLink, MenuRule } from '../ui/Menu';

export function AccountMenu() {
  const me = useMe();
  const queries = useQueryClient();
  const navigate = useNavigate();
  const leave = useMutation({
    mutationFn: signOut,
    onSuccess: async () => {
      await navigate('/sign-in');
      queries.clear();
    },
  });
  const seesMail = me.demo || me.role === 'administrator';
  return (
    <>
      {leave.isError ? <span role="alert" className="text-small text-attention-text font-semibold">Not signed out: the server did not answer. Try again.</span> : null}
      <Menu
        label="Account"
        trigger={(
          <button type="button" className="flex items-center gap-1.5 text-small py-1 hover:text-ink text-soft">
            <span className="font-semibold text-ink">{me.name}</span>
            <span className="max-sm:hidden">{ROLE_WORDS[me.role]}</span>
            <ChevronDown aria-hidden size={14} />
          </button>
        )}
      >
        <MenuLink to="/account">Account and sign-ins</MenuLink>
        {seesMail ? <MenuLink to="/outbox">Mail sent by this book</MenuLink> : null}
        {me.role === 'administrator' ? <MenuLink to="/audit">Audit trail</MenuLink> : null}
        <MenuRule />
        <MenuItem onSelect={() => leave.mutate()}>Sign out</MenuItem>
      </Menu>
    </>
  );
}
