import { AlarmScreen } from '../../../../components/alarms/alarm-screen.tsx';
import { useParam } from '../../../../hooks/use-param.ts';

export default function AlarmRoute() {
  return <AlarmScreen systemId={useParam('systemId')} alarmId={useParam('alarmId')} />;
}
