import { Fragment } from 'react';

const ADDRESS = /(https?:\/\/[^\s<>"]+)/;

/** The plain text of a mail, its addresses as links. Only http and https become links, whatever the text says. */
export function MailText({ text }: { text: string }) {
  return (
    <p className="whitespace-pre-line break-words max-w-[42rem]">
      {text.split(ADDRESS).map((piece, index) => (index % 2 === 1 ? <a key={index} href={piece} className="link break-all">{piece}</a> : <Fragment key={index}>{piece}</Fragment>))}
    </p>
  );
}
