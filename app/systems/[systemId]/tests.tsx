import { TestsScreen } from '../../../components/tests/tests-screen.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function TestsRoute() {
  return <TestsScreen systemId={useParam('systemId')} />;
}
