declare module 'virtual:endpoint-addresses' {
  /** Name of each endpoint → method, path below /api/v1, and whether it takes a body. */
  const addresses: Record<string, readonly [method: string, path: string, takesBody: boolean]>;
  export default addresses;
}
