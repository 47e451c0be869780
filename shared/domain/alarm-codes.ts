/** Codes as stored and sent; the sentence is made where it is shown. */
export const alarmCodes = ['volume-hour', 'volume-day', 'volume-week', 'run-too-long', 'device-offline'] as const;
export type AlarmCode = (typeof alarmCodes)[number];
