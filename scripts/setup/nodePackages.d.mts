interface Lock { packages?: Record<string, { version?: string; optional?: boolean; link?: boolean }> }
export function stalePackages(lock: Required<Lock>, installed: Lock): string[];
