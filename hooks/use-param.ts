import { useLocalSearchParams } from 'expo-router';

/** A part of the address that the route names, such as `systemId`. */
export function useParam(name: string): string {
  const value = useLocalSearchParams()[name];
  return (Array.isArray(value) ? value[0] : value) ?? '';
}
