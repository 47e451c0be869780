import { WatchScreen } from '../../../components/watch/watch-screen.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function WatchRoute() {
  return <WatchScreen systemId={useParam('systemId')} />;
}
