import { volumeRule } from '../volume-rule.ts';

export const volumeHour = volumeRule('volume-hour', 'hour');
