import { View } from 'react-native';
import { space } from '../../constants/spacing.ts';
import { Button } from '../ui/button.tsx';
import { Skeleton } from '../ui/skeleton.tsx';
import { Text } from '../ui/text.tsx';
import { RoundsList } from './rounds-list.tsx';
import { useRounds } from './use-rounds.ts';

/** Rounds beside a system, on a wide screen. */
export function RoundsPane({ currentId }: { currentId: string }) {
  const { query, rounds, moved, counts, sortAgain } = useRounds();
  if (query.data === undefined) return <Skeleton lines={4} name="Loading rounds" />;
  return (
    <View>
      <View style={{ padding: space.l }}>
        <Text variant="note" soft>
          {counts}
        </Text>
        {moved === 0 ? null : <Button kind="quiet" onPress={sortAgain}>{`${moved} changed: sort again`}</Button>}
      </View>
      <RoundsList rounds={rounds} currentId={currentId} short />
    </View>
  );
}
