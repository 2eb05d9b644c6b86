export interface Streams {
  readonly stdin: NodeJS.ReadStream;
  readonly stdout: NodeJS.WritableStream;
  readonly stderr: NodeJS.WritableStream;
}
export async function main(_argv: readonly string[], _streams: Streams): Promise<number> {
  return 0;
}
