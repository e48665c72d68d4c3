/** Every API call there is, found in the route files themselves, so that paths and rights cannot drift apart. */
import type { AnyDefinition, Endpoint } from './endpoint';

export const METHODS = ['GET', 'POST', 'PUT', 'PATCH', 'DELETE'] as const;
export type Method = (typeof METHODS)[number];
export const BASE = '/api/v1';

export interface Entry {
  method: Method;
  /** As the description writes it: `/labs/{lab}/members`. */
  path: string;
  definition: AnyDefinition;
  handle: Endpoint;
}

type RouteModule = Partial<Record<Method, unknown>>;

const isEndpoint = (value: unknown): value is Endpoint =>
  typeof value === 'function' && 'definition' in value;

/** Entries of route modules by file name, as `import.meta.glob` gives them. */
export function collect(modules: Record<string, RouteModule>): Entry[] {
  return Object.keys(modules)
    .sort()
    .flatMap((name) => {
      const path = name
        .replace(/^.*\/routes\/api\/v1/, '')
        .replace(/\/\+server\.ts$/, '')
        .replace(/\[(\w+)\]/g, '{$1}');
      return METHODS.flatMap((method): Entry[] => {
        const handle = modules[name]![method];
        return isEndpoint(handle) ? [{ method, path, definition: handle.definition, handle }] : [];
      });
    });
}
