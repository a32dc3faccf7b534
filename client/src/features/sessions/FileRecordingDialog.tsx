import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useRef, useState } from 'react';
import { Link } from 'react-router-dom';
import type { TrialSummary } from '@shared/api/sessions';
import { count, counted, duration, percent } from '../../lib/format';
import { Button } from '../../ui/Button';
import { Actions, Dialog } from '../../ui/Dialog';
import { TextField } from '../../ui/Field';
import { ProblemNote } from '../../ui/ProblemNote';
import { fileRecording, type FilingProgress } from './file-recording';

interface FileRecordingDialogProps {
  trial: TrialSummary;
  onClose: () => void;
}

/** Puts a recording that was made elsewhere into the book as this planned trial's. */
export function FileRecordingDialog({ trial, onClose }: FileRecordingDialogProps) {
  const queries = useQueryClient();
  const [file, setFile] = useState<File | null>(null);
  const [at, setAt] = useState('');
  const [progress, setProgress] = useState<FilingProgress | null>(null);
  const leaving = useRef<AbortController | null>(null);
  const filing = useMutation({
    mutationFn: async (chosen: File) => {
      leaving.current = new AbortController();
      setProgress({ step: 'sending', share: 0 });
      const startedAt = at === '' ? null : new Date(at).toISOString();
      return fileRecording({ trialId: trial.id, file: chosen, startedAt, signal: leaving.current.signal, onProgress: setProgress });
    },
    onSuccess: () => Promise.all([['session'], ['trial'], ['study'], ['studies'], ['today']].map((queryKey) => queries.invalidateQueries({ queryKey }))),
    onSettled: () => setProgress(null),
  });
  const stop = () => leaving.current?.abort();
  const takenBack = filing.error instanceof Error && filing.error.name === 'AbortError';
  const close = () => {
    stop();
    onClose();
  };

  return (
    <Dialog open onOpenChange={close} wide title={`File a recording as trial ${trial.number}`} description={`${trial.task.title}. The file is looked through whole; when something is wrong with it, nothing of it is kept.`}>
      {filing.data ? (
        <>
          <p role="status"><b>Filed.</b> {count(filing.data.samples)} samples, {duration(filing.data.durationS)} at {filing.data.rateHz} Hz, {filing.data.gaps === 0 ? 'no gap' : counted(filing.data.gaps, 'gap')}. It is now being looked through for flags.</p>
          <Actions>
            <Link to={`/trials/${trial.id}`} className="link font-semibold">Replay it</Link>
            <Button onClick={onClose}>Back to the run sheet</Button>
          </Actions>
        </>
      ) : (
        <form
          noValidate
          onSubmit={(event) => {
            event.preventDefault();
            if (file) filing.mutate(file);
          }}
        >
          <div className="grid gap-4 sm:grid-cols-2">
            <TextField label="Recording file" type="file" accept=".csv,.gz,text/csv,application/gzip" help="CSV as the book exports it, also gzipped: t_s, pose, grasp, tensions, lengths." onChange={(event) => { setFile(event.target.files?.[0] ?? null); filing.reset(); }} disabled={filing.isPending} />
            <TextField label="When it was recorded" type="datetime-local" help="Wall time where you are; without it, now." value={at} onChange={(event) => setAt(event.target.value)} disabled={filing.isPending} />
          </div>
          {progress ? <Progress progress={progress} /> : null}
          {takenBack ? <p role="status" className="mt-4">Taken back; nothing of it was kept.</p> : <ProblemNote className="mt-4" error={filing.error} />}
          <Actions>
            <Button tone="main" type="submit" busy={filing.isPending} disabled={file === null}>File it</Button>
            {filing.isPending ? <Button onClick={stop}>Take it back</Button> : <Button tone="quiet" onClick={onClose}>Not now</Button>}
          </Actions>
        </form>
      )}
    </Dialog>
  );
}

function Progress({ progress: { step, share } }: { progress: FilingProgress }) {
  const looking = step === 'sending' && share >= 1;
  const words = looking ? 'Looking it through' : step === 'sending' ? 'Sending' : 'Storing';
  return (
    <div className="mt-4">
      <p className="text-small">{words} <span className="text-soft">{looking ? '' : percent(share)}</span></p>
      <progress className="w-full h-1.5 accent-ink" aria-label={words} max={1} {...(looking ? {} : { value: share })} />
    </div>
  );
}
