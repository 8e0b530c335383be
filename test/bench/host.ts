/** Stands in for the host before the functions are loaded: keeps what they register. Import this before `entry`. */
export type Registered = (...args: unknown[]) => unknown;

export const registered = new Map<string, Registered>();

class HostError extends Error {
  constructor(
    readonly code: string,
    message?: string,
  ) {
    super(message);
  }
}

Object.assign(globalThis, {
  CustomFunctions: {
    associate: (id: string, body: Registered) => registered.set(id, body),
    Error: HostError,
    ErrorCode: { invalidValue: "#VALUE!", notAvailable: "#N/A" },
  },
});
