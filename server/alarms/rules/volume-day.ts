import { volumeRule } from '../volume-rule.ts';

export const volumeDay = volumeRule('volume-day', 'day');
