import { OverlayScreen } from '../../../components/overlay/overlay-screen.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function OverlayRoute() {
  return <OverlayScreen systemId={useParam('systemId')} />;
}
