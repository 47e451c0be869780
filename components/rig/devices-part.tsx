import { useState } from 'react';
import type { Device } from '#shared/contract/devices.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useDevices, useRenewCredentials } from '../../hooks/use-rig.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { StateWord } from '../ui/state-word.tsx';
import { Text } from '../ui/text.tsx';
import { AddDevice } from './add-device.tsx';
import { CredentialsShown } from './credentials-shown.tsx';
import { clockWords, deviceKindNames, heardWords, scheduleWords } from './device-words.ts';
import { RigPart, type RigPartProps } from './rig-part.tsx';

/** Pumps and probes: heard or not, clock, schedule proved or not, and their passwords. */
export function DevicesPart({ system, mayChange }: RigPartProps) {
  const devices = useDevices(system.id);
  const nowMs = useNow();
  const [isAdding, setAdding] = useState(false);
  const [renewed, setRenewed] = useState<Device | null>(null);
  return (
    <RigPart title="Pumps and probes" action={mayChange ? <Button onPress={() => setAdding(true)}>Connect a device</Button> : null}>
      {devices.isError ? <Notice error={devices.error} onRetry={() => void devices.refetch()} /> : null}
      {devices.data === undefined && !devices.isError ? <Skeleton lines={3} name="Loading the devices" /> : null}
      {devices.data?.length === 0 ? (
        <EmptyState sentence="No device yet. Connect a pump or probe: it gets a name and a password here." />
      ) : null}
      {devices.data?.map((device) => {
        const heard = heardWords(device, system.timeZone, nowMs);
        const notes = [device.kind === 'pump' ? scheduleWords(device) : null, clockWords(device)].filter((note) => note !== null);
        return (
          <div key={device.id} className="item">
            <div className="item-head">
              <Text bold>{`${device.name} (${deviceKindNames[device.kind].toLowerCase()})`}</Text>
              <StateWord mark={heard.mark}>{heard.words}</StateWord>
            </div>
            {notes.map((note) => (
              <Text key={note}>{note}</Text>
            ))}
            {device.rejects > 0 ? <Text soft>{`${device.rejects} messages refused; see the end of this page.`}</Text> : null}
            {mayChange ? (
              <div className="row-of-buttons">
                <Button kind="quiet" name={`New password for ${device.name}`} onPress={() => setRenewed(device)}>
                  New password
                </Button>
              </div>
            ) : null}
          </div>
        );
      })}
      <Sheet title="Connect a device" open={isAdding} onClose={() => setAdding(false)}>
        <AddDevice systemId={system.id} onDone={() => setAdding(false)} />
      </Sheet>
      <Sheet title="New password" open={renewed !== null} onClose={() => setRenewed(null)}>
        {renewed === null ? null : <RenewPassword systemId={system.id} device={renewed} onDone={() => setRenewed(null)} />}
      </Sheet>
    </RigPart>
  );
}

function RenewPassword({ systemId, device, onDone }: { systemId: string; device: Device; onDone: () => void }) {
  const renew = useRenewCredentials(systemId);
  if (renew.data !== undefined) return <CredentialsShown credentials={renew.data.credentials} onDone={onDone} />;
  return (
    <>
      <Text>{`The present password of ${device.name} stops at once, and an open connection is cut. A pump keeps its own schedule meanwhile.`}</Text>
      {renew.isError ? <Notice error={renew.error} /> : null}
      <div className="row-of-buttons">
        <Button kind="primary" busy={renew.isPending} onPress={() => renew.mutate(device.id)}>
          Make a new password
        </Button>
        <Button onPress={onDone}>Cancel</Button>
      </div>
    </>
  );
}
