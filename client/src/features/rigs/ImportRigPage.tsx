import { useQuery } from '@tanstack/react-query';
import { useId, useMemo, useRef, useState, type DragEvent, type FormEvent } from 'react';
import { useNavigate } from 'react-router-dom';
import { Crumbs } from '../../ui/bar-slots';
import { Button, ButtonLink } from '../../ui/Button';
import { classNames } from '../../ui/class-names';
import { Actions } from '../../ui/Dialog';
import { TextArea, TextField } from '../../ui/Field';
import { Page, Section } from '../../ui/Page';
import { ProblemNote } from '../../ui/ProblemNote';
import { rigsQuery, useImportRig } from './queries';
import { readRigText } from './read-rig-text';

/** A rig file is a few kilobytes; whatever is larger than this is another file. */
const LARGEST_FILE_BYTES = 1_000_000;

export function ImportRigPage() {
  const navigate = useNavigate();
  const [text, setText] = useState('');
  const [remark, setRemark] = useState('');
  const [asked, setAsked] = useState(false);
  const read = useMemo(() => readRigText(text), [text]);
  const rigs = useQuery(rigsQuery).data ?? [];
  const send = useImportRig();
  const known = read.state === 'sound' ? rigs.find((rig) => rig.code === read.code) : undefined;

  const change = (value: string) => {
    setText(value);
    setAsked(false);
    send.reset();
  };
  const submit = (event: FormEvent) => {
    event.preventDefault();
    setAsked(true);
    if (read.state === 'sound') send.mutate({ file: read.file, remark }, { onSuccess: (revision) => navigate(`/rigs/${revision.rigId}`) });
  };

  return (
    <Page title="Import a rig file" lead="A new rig, or the next revision of the rig with the same code. A revision never changes after that.">
      <Crumbs steps={[{ to: '/rigs', name: 'Rigs' }]} here="Import a rig file" />
      <form noValidate onSubmit={submit}>
        <Section title="The file" note="format tautbook.rig/1">
          <div className="max-w-[52rem]">
            <FilePlace onText={change} />
            <TextArea
              className="mt-4"
              label="The file’s text"
              help="SI units: metres, newtons, radians. Cables count from 1."
              rows={14}
              spellCheck={false}
              value={text}
              onChange={(event) => change(event.target.value)}
              error={asked && read.state === 'empty' ? 'Choose, drop or paste a rig file' : undefined}
            />
            <div className="mt-4" aria-live="polite">
              {read.state === 'faulty' ? <ProblemNote error={read.problem} /> : null}
              {read.state === 'sound' ? (
                <p>
                  <span className="font-semibold">{read.title}</span>: {read.cables} cables, sound.{' '}
                  {known ? `It becomes revision ${known.revisions + 1} of ${known.code}; recordings stay with the revision they were made on.` : `A new rig, ${read.code}.`}
                </p>
              ) : null}
            </div>
          </div>
        </Section>
        <Section title="What changed" note="one line">
          <TextField className="max-w-[52rem]" label="Remark" labelHidden value={remark} maxLength={400} placeholder="For example: exits measured again after the frame was moved" onChange={(event) => setRemark(event.target.value)} />
          <ProblemNote className="mt-4" error={send.error} />
          <Actions>
            <Button tone="main" type="submit" busy={send.isPending}>{known ? `Import revision ${known.revisions + 1}` : 'Import the rig'}</Button>
            <ButtonLink tone="quiet" to="/rigs">Not now</ButtonLink>
          </Actions>
        </Section>
      </form>
    </Page>
  );
}

/** Takes a file by picker or by dropping it here. */
function FilePlace({ onText }: { onText: (text: string) => void }) {
  const id = useId();
  const picker = useRef<HTMLInputElement>(null);
  const [over, setOver] = useState(false);
  const [refused, setRefused] = useState<string | null>(null);
  const take = async (file: File | undefined) => {
    if (file === undefined) return;
    if (file.size > LARGEST_FILE_BYTES) {
      setRefused(`${file.name} has ${Math.round(file.size / 1000)} kB; a rig file has a few. Recordings go another way: a device streams them.`);
      return;
    }
    setRefused(null);
    onText(await file.text());
  };
  const drop = (event: DragEvent) => {
    event.preventDefault();
    setOver(false);
    void take(event.dataTransfer.files[0]);
  };
  return (
    <div
      onDragOver={(event) => {
        event.preventDefault();
        setOver(true);
      }}
      onDragLeave={() => setOver(false)}
      onDrop={drop}
      className={classNames('border-y border-dashed border-rule-field px-4 py-5 flex flex-wrap items-center gap-x-5 gap-y-2', over && 'bg-wash')}
    >
      <label htmlFor={id} className="sr-only">Rig file</label>
      <input
        id={id}
        ref={picker}
        type="file"
        accept="application/json,.json"
        tabIndex={-1}
        className="sr-only"
        onChange={(event) => {
          void take(event.target.files?.[0]);
          // The same file, mended, can be chosen again.
          event.target.value = '';
        }}
      />
      <Button onClick={() => picker.current?.click()}>Choose a file</Button>
      <p className="text-soft">or drop it here, or paste its text below.</p>
      {refused ? <p role="alert" className="basis-full text-small font-semibold text-attention-text">{refused}</p> : null}
    </div>
  );
}
