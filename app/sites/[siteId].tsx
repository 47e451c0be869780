import { SiteScreen } from '../../components/site/site-screen.tsx';
import { useParam } from '../../hooks/use-param.ts';

export default function SiteRoute() {
  return <SiteScreen siteId={useParam('siteId')} />;
}
