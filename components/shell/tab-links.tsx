import { Link, usePathname } from 'expo-router';
import { useAlarms } from '../../hooks/use-alarms.ts';
import { VisuallyHidden } from '../ui/visually-hidden.tsx';
import { isCurrentTab, rigTab, systemTabs } from './system-tabs.ts';

/** The screens of a system as links: a bar at the bottom of a phone, a row when wide. */
export function TabLinks({ systemId, isRow }: { systemId: string; isRow: boolean }) {
  const pathname = usePathname();
  const alarms = useAlarms(systemId).data?.length ?? 0;
  const tabs = isRow ? [...systemTabs, rigTab] : systemTabs;
  return (
    <nav aria-label="Screens of this system" className={isRow ? 'nav-row' : undefined}>
      <ul className="tab-bar">
        {tabs.map((tab) => (
          <li key={tab.label}>
            <Link href={`/systems/${systemId}${tab.path}`} asChild>
              <a className="tab" aria-current={isCurrentTab(pathname, systemId, tab.path) ? 'page' : undefined}>
                {tab.label}
                {tab.path === '/alarms' && alarms > 0 ? (
                  <span className="tab-count">
                    {alarms}
                    <VisuallyHidden> open</VisuallyHidden>
                  </span>
                ) : null}
              </a>
            </Link>
          </li>
        ))}
      </ul>
    </nav>
  );
}
