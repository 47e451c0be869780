import type { Href } from 'expo-router';

/** Where to go after signing in: an address of this app, else rounds. */
export function placeAfterSignIn(to: string | undefined): Href {
  const isOurs = to !== undefined && /^\/(?!\/)[\w/-]*$/.test(to);
  return (isOurs ? to : '/') as Href;
}
