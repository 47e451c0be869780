import { Link } from 'expo-router';
import { StateWord } from '../ui/state-word.tsx';
import type { Round } from './rounds-model.ts';

/** The systems, each with its sentence; the whole row is the link. */
export function RoundsList({ rounds, currentId, short }: { rounds: readonly Round[]; currentId?: string; short?: boolean }) {
  return (
    <ul className="rounds">
      {rounds.map((round) => (
        <li key={round.id}>
          <Link href={`/systems/${round.id}`} asChild>
            <a className="round" aria-current={round.id === currentId ? 'page' : undefined}>
              <span className="round-head">
                <span className="round-name">{round.name}</span>
                <StateWord mark={round.mark}>{round.word}</StateWord>
              </span>
              <span className="round-soft">{round.siteName}</span>
              {short === true ? null : <span>{round.sentence}</span>}
            </a>
          </Link>
        </li>
      ))}
    </ul>
  );
}
