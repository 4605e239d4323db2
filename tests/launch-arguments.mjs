/**
 * How Chromium is started for tests: quiet on the network, drawn in software and, where tests run
 * as root (containers), without the sandbox that root may not use.
 */
export const launchArguments = [
  ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];
