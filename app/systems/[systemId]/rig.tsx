import { RigScreen } from '../../../components/rig/rig-screen.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function RigRoute() {
  return <RigScreen systemId={useParam('systemId')} />;
}
