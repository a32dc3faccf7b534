/** Texts of the mails. Each is written twice, as plain text and as HTML that needs no pictures and no fonts from elsewhere. */
export interface Letter {
  subject: string;
  text: string;
  html: string;
}

const escapeHtml = (text: string) => text.replace(/[&<>"']/g, (mark) => `&#${mark.charCodeAt(0)};`);

interface LinkLetter {
  subject: string;
  greeting: string;
  before: string;
  linkText: string;
  link: string;
  after: string;
}

function linkLetter({ subject, greeting, before, linkText, link, after }: LinkLetter): Letter {
  const paragraphs = [escapeHtml(greeting), escapeHtml(before), `<a href="${escapeHtml(link)}">${escapeHtml(linkText)}</a>`, escapeHtml(after)];
  return {
    subject,
    text: `${greeting}\n\n${before}\n\n${link}\n\n${after}\n`,
    html: `<!doctype html><html lang="en"><body style="font-family: sans-serif; line-height: 1.5">${paragraphs.map((each) => `<p>${each}</p>`).join('')}</body></html>`,
  };
}

export const invitation = (to: { name: string; by: string; link: string; days: number }): Letter => linkLetter({
  subject: 'You are invited to Tautbook',
  greeting: `Hello ${to.name},`,
  before: `${to.by} has added you to the lab’s Tautbook, the shared record of its sessions. Choose a password to begin:`,
  linkText: 'Choose a password',
  link: to.link,
  after: `The link works once, for ${to.days} days. If you do not know what this is about, you need not do anything.`,
});

export const passwordReset = (to: { name: string; link: string; minutes: number }): Letter => linkLetter({
  subject: 'Choose a new Tautbook password',
  greeting: `Hello ${to.name},`,
  before: 'Somebody, probably you, asked for a new password. Choose it here:',
  linkText: 'Choose a new password',
  link: to.link,
  after: `The link works once, for ${to.minutes} minutes. If it was not you, your old password stays as it is.`,
});
