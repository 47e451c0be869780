import type { AlarmRuleModule } from '../finding.ts';
import { deviceOffline } from './device-offline.ts';
import { runTooLong } from './run-too-long.ts';
import { volumeDay } from './volume-day.ts';
import { volumeHour } from './volume-hour.ts';
import { volumeWeek } from './volume-week.ts';

/** Every rule that is evaluated; the interlocks first. */
export const alarmRuleModules: readonly AlarmRuleModule[] = [runTooLong, volumeHour, volumeDay, volumeWeek, deviceOffline];
