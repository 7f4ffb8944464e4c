import type { Guard } from './guard.ts';

export function manualButton(): Guard {
  return {
    threshold: 0.5,
    reading: (signals) => (signals.buttonPressed ? 1 : 0),
    describe: () => 'stop button is pressed',
  };
}
