import type { Letter } from './letter';

export function invitationLetter(facts: { to: string; name: string; from: string; link: string; days: number }): Letter {
  return {
    to: facts.to,
    subject: 'Your invitation to Tallystone',
    body: [
      `${facts.name},`,
      '',
      `${facts.from} invites you to Tallystone, where scorecards are built, checked and documented.`,
      'Open this address to set a password and open your account:',
      '',
      facts.link,
      '',
      `It works once and within ${facts.days} days. If you did not expect it, ignore this letter: without the address nobody can use it.`,
      '',
    ].join('\n'),
  };
}
