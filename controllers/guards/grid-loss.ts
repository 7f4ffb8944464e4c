import type { Guard } from './guard.ts';

export function gridLoss(): Guard {
  return {
    speaks: (signals) => !signals.gridConnected,
    reading: (signals) => (signals.gridConnected ? 0 : 1),
    describe: () => 'no grid voltage',
  };
}
