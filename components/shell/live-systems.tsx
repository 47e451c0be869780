import { useLive } from '../../hooks/use-live.ts';
import { useSystems } from '../../hooks/use-systems.ts';

/** Follows the live stream of all one's systems. Shows nothing. */
export function LiveSystems() {
  const systems = useSystems();
  useLive(systems.data?.map((system) => system.id) ?? []);
  return null;
}
