export function startTestCluster(): Promise<{ url: string; stop(): Promise<void> }>;
