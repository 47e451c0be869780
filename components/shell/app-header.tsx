import { Link } from 'expo-router';
import { Menu } from '../ui/menu.tsx';
import { Wordmark } from './wordmark.tsx';

/** The top of pages that belong to no system. */
export function AppHeader() {
  return (
    <header className="shell-head">
      <div className="shell-head-grow">
        <Link href="/" aria-label="Steadfall, to rounds" style={{ textDecorationLine: 'none' }}>
          <Wordmark />
        </Link>
      </div>
      <Menu
        name="Menu"
        items={[
          { href: '/', label: 'Rounds' },
          { href: '/account', label: 'Account' },
        ]}
      />
    </header>
  );
}
