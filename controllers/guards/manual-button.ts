import type { Guard } from './guard.ts';

export function manualButton(): Guard {
  return {
    speaks: (signals) => signals.buttonPressed,
    reading: (signals) => (signals.buttonPressed ? 1 : 0),
    describe: () => 'stop button is pressed',
  };
}
