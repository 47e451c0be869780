import { TestsScreen } from '../../../components/tests/tests-screen.tsx';
import { useParam } from '../../../hooks/use-param.ts';

/** `?new=1` opens the sheet for a new test at once. */
export default function TestsRoute() {
  const systemId = useParam('systemId');
  return <TestsScreen key={systemId} systemId={systemId} startOpen={useParam('new') === '1'} />;
}
