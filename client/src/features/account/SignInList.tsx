import { useMutation, useQueryClient, useSuspenseQuery } from '@tanstack/react-query';
import { endOtherSignIns, endSignIn, listSignIns, type SignInEntry } from '../../lib/auth';
import { wallTime } from '../../lib/format';
import { Button } from '../../ui/Button';
import { ProblemNote } from '../../ui/ProblemNote';
import { RuledTable, type RuledColumn } from '../../ui/RuledTable';
import { StateWord } from '../../ui/StateWord';
import { browserWords } from './browser-words';
import { signInsKey } from './sign-ins-key';

export function SignInList() {
  const queries = useQueryClient();
  const signIns = useSuspenseQuery({ queryKey: signInsKey, queryFn: listSignIns }).data;
  const onSuccess = () => queries.invalidateQueries({ queryKey: signInsKey });
  const end = useMutation({ mutationFn: endSignIn, onSuccess });
  const endOthers = useMutation({ mutationFn: endOtherSignIns, onSuccess });
  const columns: RuledColumn<SignInEntry>[] = [
    { key: 'device', head: 'Browser', lead: true, cell: (row) => <span className="font-semibold">{browserWords(row.device)}</span> },
    { key: 'started', head: 'Signed in', width: '12rem', cell: (row) => wallTime(row.startedAt) },
    { key: 'until', head: 'Ends', width: '12rem', cell: (row) => wallTime(row.expiresAt) },
    {
      key: 'do',
      head: 'To do',
      plain: true,
      width: '9rem',
      align: 'right',
      cell: (row) => (row.here ? <StateWord tone="live">here</StateWord> : <Button tone="quiet" busy={end.isPending} onClick={() => end.mutate(row.token)} about={`the sign-in of ${wallTime(row.startedAt)}`}>End</Button>),
    },
  ];
  return (
    <>
      <RuledTable caption="Your sign-ins" columns={columns} rows={signIns} rowKey={(row) => row.token} />
      <ProblemNote className="mt-3" error={end.error ?? endOthers.error} />
      {signIns.length > 1 ? <Button className="mt-4" busy={endOthers.isPending} onClick={() => endOthers.mutate()}>End all others</Button> : null}
    </>
  );
}
