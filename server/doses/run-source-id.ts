/** How the dose ledger names a run: `doseLedger.sourceId` where `sourceKind` is `run`. */
export function runSourceId(deviceId: string, run: string): string {
  return `${deviceId}/${run}`;
}
