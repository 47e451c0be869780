import { useState } from 'react';
import { Button } from '../ui/button.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Text } from '../ui/text.tsx';

/** The name and password of a device, shown this once. */
export function CredentialsShown({ credentials, onDone }: { credentials: { username: string; password: string }; onDone: () => void }) {
  const [said, setSaid] = useState('');
  async function copy(): Promise<void> {
    try {
      await navigator.clipboard.writeText(credentials.password);
      setSaid('Password copied.');
    } catch {
      setSaid('The browser does not let this page copy: select the password and copy it by hand.');
    }
  }
  return (
    <div style={{ display: 'flex', flexDirection: 'column', gap: 12 }}>
      <Text>Enter both at the device now. The password is shown this once, and only its fingerprint is kept.</Text>
      <dl className="facts">
        <dt>User name and client id</dt>
        <dd className="figures" style={{ overflowWrap: 'anywhere' }}>
          {credentials.username}
        </dd>
        <dt>Password</dt>
        <dd className="figures" style={{ overflowWrap: 'anywhere' }}>
          {credentials.password}
        </dd>
      </dl>
      <LiveRegion>{said}</LiveRegion>
      <div className="row-of-buttons">
        <Button onPress={() => void copy()}>Copy the password</Button>
        <Button kind="primary" onPress={onDone}>
          I have entered both
        </Button>
      </div>
    </div>
  );
}
