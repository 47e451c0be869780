import { describe, expect, it } from 'vitest';
import { placeAfterSignIn } from '../../../components/auth/place-after-sign-in.ts';
import { ordinal } from '../../../components/shell/ordinal.ts';
import { isCurrentTab } from '../../../components/shell/system-tabs.ts';

describe('the tab of an address', () => {
  it.each([
    ['/systems/s1', '', true],
    ['/systems/s1/tests', '', false],
    ['/systems/s1/alarms/a9', '/alarms', true],
    ['/systems/s1/alarms', '/alarms', true],
    ['/systems/s2/alarms', '/alarms', false],
  ])('%s is %j: %s', (pathname, tab, expected) => {
    expect(isCurrentTab(pathname, 's1', tab)).toBe(expected);
  });
});

describe('places in a list', () => {
  it('are ordinals', () => {
    expect([1, 2, 3, 4, 11, 12, 13, 21, 102, 111].map(ordinal)).toEqual([
      '1st',
      '2nd',
      '3rd',
      '4th',
      '11th',
      '12th',
      '13th',
      '21st',
      '102nd',
      '111th',
    ]);
  });
});

describe('the place after signing in', () => {
  it('is where one was, and never another site', () => {
    expect(placeAfterSignIn('/systems/0190a000/alarms')).toBe('/systems/0190a000/alarms');
    for (const to of ['//evil.example', 'https://evil.example', 'javascript:alert(1)', '/\\evil.example', undefined]) {
      expect(placeAfterSignIn(to)).toBe('/');
    }
  });
});
