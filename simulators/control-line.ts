/** What whoever runs the process may type, one command a line. Nothing of this exists over MQTT. */
export type Command =
  | { do: 'dose'; ml: number; head: number }
  | { do: 'calibrate'; seconds: number; head: number }
  | { do: 'stick' | 'unstick'; head: number }
  | { do: 'offline'; seconds: number }
  | { do: 'silent' | 'clock'; isOn: boolean }
  | { do: 'restart' | 'quit' };

export const commandHelp = `commands on standard input, one a line:
  dose ML [HEAD]            press the button at the pump (head 1)
  calibrate SECONDS [HEAD]  run the motor for a calibration
  stick HEAD, unstick HEAD  the relay of a head does not open any more: its next run goes on until a stop order
  offline SECONDS           lose the network
  silent on|off             hear orders and do nothing
  clock on|off              lose or set the time of day
  restart                   pull the plug and put it back (so does the signal SIGUSR2)
  quit                      end in good order`;

/** @returns null for what is no command. */
export function parseCommand(line: string): Command | null {
  const [word = '', first = '', second = '1'] = line.trim().split(/\s+/);
  const amount = Number(first);
  const isAmount = first !== '' && Number.isFinite(amount) && amount > 0;
  const head = Number(second);
  const isHead = Number.isInteger(head) && head >= 1 && head <= 16;
  switch (word) {
    case 'dose':
      return isAmount && isHead ? { do: 'dose', ml: amount, head } : null;
    case 'calibrate':
      return isAmount && isHead ? { do: 'calibrate', seconds: amount, head } : null;
    case 'stick':
    case 'unstick':
      return Number.isInteger(amount) && isAmount ? { do: word, head: amount } : null;
    case 'offline':
      return isAmount ? { do: 'offline', seconds: amount } : null;
    case 'silent':
    case 'clock':
      return first === 'on' || first === 'off' ? { do: word, isOn: first === 'on' } : null;
    case 'restart':
    case 'quit':
      return { do: word };
    default:
      return null;
  }
}
