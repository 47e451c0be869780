import { volumeRule } from '../volume-rule.ts';

export const volumeWeek = volumeRule('volume-week', 'week');
