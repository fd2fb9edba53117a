/** Reads and checks the environment of the production mode. */
export declare const productionEnvironment: (environment: Record<string, string | undefined>) => {
  env: Record<string, string>
  problems: string[]
}
