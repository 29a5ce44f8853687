declare module 'autocannon' {
  interface Options {
    url: string;
    connections?: number;
    duration?: number;
    headers?: Record<string, string>;
  }
  interface Result {
    '2xx': number;
    non2xx: number;
    duration: number;
  }
  export default function autocannon(options: Options): Promise<Result>;
}
