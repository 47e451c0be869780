import { Text } from '../ui/text.tsx';

export interface Fact {
  readonly name: string;
  readonly value: string;
}

/** Names and values under each other, with hairlines. */
export function Facts({ facts }: { facts: readonly Fact[] }) {
  return (
    <dl className="watch-facts">
      {facts.map((fact) => (
        <div key={fact.name}>
          <dt>
            <Text soft>{fact.name}</Text>
          </dt>
          <dd>
            <Text>{fact.value}</Text>
          </dd>
        </div>
      ))}
    </dl>
  );
}
