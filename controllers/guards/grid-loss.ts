import type { Guard } from './guard.ts';

export function gridLoss(): Guard {
  return {
    threshold: 0.5,
    reading: (signals) => (signals.gridConnected ? 0 : 1),
    describe: () => 'no grid voltage',
  };
}
