/** The screens of a system, in the order of the tab bar. */
export const systemTabs = [
  { path: '', label: 'Watch' },
  { path: '/overlay', label: 'Overlay' },
  { path: '/tests', label: 'Tests' },
  { path: '/alarms', label: 'Alarms' },
] as const;

/** Screens behind the menu on a phone, beside the tabs when wide. */
export const rigTab = { path: '/rig', label: 'Rig' } as const;

/** Which tab an address belongs to: the alarm's own page belongs to Alarms. */
export function isCurrentTab(pathname: string, systemId: string, tabPath: string): boolean {
  const base = `/systems/${systemId}`;
  if (tabPath === '') return pathname === base;
  return pathname === `${base}${tabPath}` || pathname.startsWith(`${base}${tabPath}/`);
}
