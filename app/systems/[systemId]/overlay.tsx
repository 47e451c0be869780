import { OverlayScreen } from '../../../components/overlay/overlay-screen.tsx';
import { TestSheet } from '../../../components/tests/test-sheet.tsx';
import { useParam } from '../../../hooks/use-param.ts';

export default function OverlayRoute() {
  const systemId = useParam('systemId');
  return (
    <OverlayScreen
      key={systemId}
      systemId={systemId}
      renderTestSheet={(testId, onClose) => <TestSheet systemId={systemId} testId={testId} onClose={onClose} />}
    />
  );
}
