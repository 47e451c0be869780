import { Link, Slot } from 'expo-router';
import { useBreakpoint } from '../../hooks/use-breakpoint.ts';
import { useSystem, useSystems } from '../../hooks/use-systems.ts';
import { isAtLeast } from '#shared/domain/role.ts';
import type { System } from '#shared/contract/systems.ts';
import { RoundsPane } from '../rounds/rounds-pane.tsx';
import { StopControl } from '../stop/stop-control.tsx';
import { LinkText } from '../ui/link-text.tsx';
import { Menu } from '../ui/menu.tsx';
import { Notice } from '../ui/notice.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { ordinal } from './ordinal.ts';
import { StaleBar } from './stale-bar.tsx';
import { TabLinks } from './tab-links.tsx';
import { Wordmark } from './wordmark.tsx';

const menuOf = (system: System) => [
  { href: `/systems/${system.id}/rig` as const, label: 'Rig' },
  { href: `/sites/${system.siteId}` as const, label: 'Site' },
  { href: '/account' as const, label: 'Account' },
];

/** The frame of a system: where one is, its screens, and Stop, pinned on every one of them. */
export function SystemShell({ systemId }: { systemId: string }) {
  const isWide = useBreakpoint() === 'wide';
  const system = useSystem(systemId);
  const all = useSystems();

  if (system.isError && system.data === undefined) {
    return (
      <main id="content" className="page-narrow">
        <Notice error={system.error} onRetry={() => void system.refetch()} />
        <LinkText href="/" block>
          To rounds
        </LinkText>
      </main>
    );
  }
  if (system.data === undefined) {
    return (
      <main id="content" className="page-narrow">
        <Skeleton lines={4} name="Opening the system" />
      </main>
    );
  }

  const mayStop = isAtLeast(system.data.role, 'sitter');
  const place = all.data === undefined ? -1 : all.data.findIndex((other) => other.id === systemId);
  const placeWords = all.data === undefined || place === -1 || all.data.length < 2 ? null : `${ordinal(place + 1)} of ${all.data.length}`;

  if (isWide) {
    return (
      <div className="shell">
        <header className="shell-head">
          <Link href="/" aria-label="Steadfall, to rounds" style={{ textDecorationLine: 'none', width: 264 }}>
            <Wordmark />
          </Link>
          <div className="shell-head-grow">
            <TabLinks systemId={systemId} isRow />
          </div>
          <Menu name="Menu" items={menuOf(system.data).slice(1)} />
          {mayStop ? <StopControl system={system.data} /> : null}
        </header>
        <StaleBar />
        <div className="shell-middle">
          <aside className="shell-rounds" aria-label="Rounds">
            <RoundsPane currentId={systemId} />
          </aside>
          <main id="content" className="shell-main" tabIndex={-1}>
            <Slot />
          </main>
        </div>
      </div>
    );
  }

  return (
    <div className="shell">
      <header className="shell-head">
        <div className="shell-head-grow">
          <Link href="/" asChild>
            <a className="system-back" aria-label={`${system.data.name}${placeWords === null ? '' : `, ${placeWords}`}: back to rounds`}>
              <span className="chevron" aria-hidden="true" />
              <span className="system-back-name">{system.data.name}</span>
              {placeWords === null ? null : <span className="system-back-place">{placeWords}</span>}
            </a>
          </Link>
        </div>
        <Menu name="Menu" items={menuOf(system.data)} />
      </header>
      <StaleBar />
      <main id="content" className="shell-main" tabIndex={-1}>
        <Slot />
      </main>
      <div className="shell-foot">
        {mayStop ? <StopControl system={system.data} /> : null}
        <TabLinks systemId={systemId} isRow={false} />
      </div>
    </div>
  );
}
