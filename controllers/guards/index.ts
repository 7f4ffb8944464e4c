import type { GuardWatch } from '../protection.ts';
import { generatorOverspeed } from './generator-overspeed.ts';
import { gridLoss } from './grid-loss.ts';
import type { Guard } from './guard.ts';
import { manualButton } from './manual-button.ts';
import { pitchDeviation } from './pitch-deviation.ts';
import { rotorOverspeed } from './rotor-overspeed.ts';

export function guard(settings: GuardWatch): Guard {
  switch (settings.watch) {
    case 'rotor overspeed':
      return rotorOverspeed(settings.above);
    case 'generator overspeed':
      return generatorOverspeed(settings.above);
    case 'pitch deviation':
      return pitchDeviation(settings.above);
    case 'grid loss':
      return gridLoss();
    case 'manual button':
      return manualButton();
  }
}
