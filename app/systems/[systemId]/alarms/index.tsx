import { AlarmsScreen } from '../../../../components/alarms/alarms-screen.tsx';
import { useParam } from '../../../../hooks/use-param.ts';

export default function AlarmsRoute() {
  return <AlarmsScreen systemId={useParam('systemId')} />;
}
