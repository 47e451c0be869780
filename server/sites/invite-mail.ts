import type { Role } from '#shared/domain/role.ts';

const may: Record<Role, string> = {
  owner: 'owner: you may do everything there',
  keeper: 'keeper: you run the systems day to day',
  sitter: 'sitter: you look in, log what you do, and may stop the dosing',
  viewer: 'viewer: you see how the systems do',
};

/** The mail that carries the one-time link. It is plain text, and the only thing to press is the link. */
export function inviteMail(invite: { siteName: string; role: Role; link: string }): { subject: string; body: string } {
  return {
    subject: `You are invited to ${invite.siteName} on Steadfall`,
    body: [
      `You are invited to the site "${invite.siteName}" as ${may[invite.role]}.`,
      '',
      'Open this link within 7 days to join. It works once:',
      invite.link,
      '',
      'If you did not expect this, do nothing.',
    ].join('\n'),
  };
}
