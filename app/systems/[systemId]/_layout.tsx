import { SystemShell } from '../../../components/shell/system-shell.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function SystemLayout() {
  return <SystemShell systemId={useParam('systemId')} />;
}
