/** What to do while nobody knows whether the pump heard a stop. */
export const pullThePlug = "Pull the pump's plug; dry hands first.";

/** Why a pump refused an order, in words; an unknown code is shown as the pump said it. */
export function refusalWords(why: string | null): string {
  switch (why) {
    case null:
      return 'it gave no reason';
    case 'clock':
      return 'its clock is not set';
    case 'stopped':
      return 'it is stopped';
    case 'limit':
      return 'its own ceiling is reached';
    default:
      return why;
  }
}
