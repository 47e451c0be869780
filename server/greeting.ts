import type { RunningServer } from './start-server.ts';

/** The address alone: that of an external broker may hold a password. */
function withoutCredentials(address: string): string {
  const url = new URL(address);
  url.username = '';
  url.password = '';
  return url.href.replace(/\/$/, '');
}

/** What is printed once everything is up: where to go, and how to get in. */
export async function greeting(server: RunningServer): Promise<string[]> {
  const { url, mqttUrl, context } = server;
  const lines = ['', `Steadfall is ready: ${url}`, `Devices connect to ${withoutCredentials(mqttUrl)}`];
  const signIns = (await server.demo)?.signIns ?? null;
  if (signIns !== null) {
    lines.push(`Demo sign-ins, all with the password "${signIns.password}":`, ...signIns.emails.map((email) => `  ${email}`));
  }
  if (context.welcomeCode !== null) {
    lines.push(`Make the first account on ${context.publicUrl()}/welcome with the code ${context.welcomeCode}`);
  }
  return lines;
}
