import { useState } from 'react';
import { Button } from '../ui/button.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Text } from '../ui/text.tsx';

/** The name and password of a device, shown this once. */
export function CredentialsShown({
  credentials,
  onDone,
}: {
  credentials: { username: string; password: string | null };
  onDone: () => void;
}) {
  const [said, setSaid] = useState('');
  const { password } = credentials;
  if (password === null) {
    return (
      <div style={{ display: 'flex', flexDirection: 'column', gap: 12 }}>
        <Text>The device is registered, but its password was shown before and is not kept. Make a new password for it in the list.</Text>
        <div className="row-of-buttons">
          <Button kind="primary" onPress={onDone}>
            To the list
          </Button>
        </div>
      </div>
    );
  }
  async function copy(shown: string): Promise<void> {
    try {
      await navigator.clipboard.writeText(shown);
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
          {password}
        </dd>
      </dl>
      <LiveRegion>{said}</LiveRegion>
      <div className="row-of-buttons">
        <Button onPress={() => void copy(password)}>Copy the password</Button>
        <Button kind="primary" onPress={onDone}>
          I have entered both
        </Button>
      </div>
    </div>
  );
}
