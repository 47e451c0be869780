import { useState } from 'react';
import { useFreshness } from '../../hooks/use-freshness.ts';
import { useNow } from '../../hooks/use-now.ts';
import { useSystems } from '../../hooks/use-systems.ts';
import { countSentence } from '../../lib/sentences/system-rank.ts';
import { inShownOrder, roundOf } from './rounds-model.ts';

/** The rounds in an order that stays until a person asks for the new one. */
export function useRounds() {
  const systems = useSystems();
  const nowMs = useNow(30_000);
  const { staleSinceMs } = useFreshness();
  const [order, setOrder] = useState<string[] | null>(null);
  const items = systems.data ?? [];
  if (order === null && systems.data !== undefined) setOrder(systems.data.map((system) => system.id));
  const { shown, moved } = inShownOrder(order ?? [], items);
  const rounds = shown.map((system) => roundOf(system, nowMs, staleSinceMs));
  return {
    query: systems,
    rounds,
    moved,
    counts: countSentence(rounds.map((round) => round.rank)),
    sortAgain: () => setOrder(items.map((system) => system.id)),
  };
}
