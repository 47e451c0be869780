import { describe, expect, it } from 'vitest';
import { netVolumeLitres } from '#shared/domain/net-volume.ts';

describe('net volume', () => {
  it('adds display and sump and takes the displacement off', () => {
    expect(netVolumeLitres({ displayLitres: 400, sumpLitres: 80, displacementLitres: 60 })).toBe(420);
    expect(netVolumeLitres({ displayLitres: 75, sumpLitres: 0, displacementLitres: 0 })).toBe(75);
  });

  it.each([480, 480.5, 1000])('is none where %d L of 480 L are displaced', (displacementLitres) => {
    expect(netVolumeLitres({ displayLitres: 400, sumpLitres: 80, displacementLitres })).toBeNull();
  });
});
