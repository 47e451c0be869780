/** True when a page of that origin came from this server: same host and port as asked, or those of `PUBLIC_URL`. */
export function isOwnOrigin(origin: string, host: string | undefined, publicUrl: string | undefined): boolean {
  if (!URL.canParse(origin)) return false;
  if (publicUrl !== undefined && new URL(publicUrl).origin === origin) return true;
  return host !== undefined && new URL(origin).host === host;
}
