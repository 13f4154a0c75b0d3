/** What the generated glue, which stands before the worker's script in its file, puts into the global scope. */
declare class Session {
  constructor(post: (message: unknown) => void);
  handle(request: unknown): void;
  /** Does one slice of the work at hand; true when more is left. */
  advance(): boolean;
}

declare const wasm_bindgen: {
  initSync(from: { module: WebAssembly.Module }): unknown;
  Session: typeof Session;
};
