export function startTestCluster(): Promise<{ url: string; close(): Promise<void> }>;
