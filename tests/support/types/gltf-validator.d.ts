/** What the tests use of the validator, which comes without types. */
declare module 'gltf-validator' {
  interface Report {
    readonly issues: {
      readonly messages: readonly {
        readonly code: string;
        readonly message: string;
        readonly pointer?: string;
      }[];
    };
    readonly info: { readonly version: string };
  }
  export function validateBytes(bytes: Uint8Array): Promise<Report>;
}
