/** Environment variables by name, passed in; a variable that is not set is undefined. */
export type Environment = Readonly<Record<string, string | undefined>>;

/** A text with its variables filled in, and what was wrong with them. */
export interface Filled {
  readonly text: string;
  readonly problems: readonly string[];
}

/**
 * Fills `${NAME}` in from the environment; `$${` is a literal `${`. What was filled in is not
 * looked at again. A missing variable leaves its text as it is and gives a problem.
 */
export function fillEnvironment(text: string, environment: Environment): Filled {
  const problems: string[] = [];
  const filled = text.replace(/\$\$\{|\$\{([^}]*)(\}?)/g, (whole, name?: string, end?: string) => {
    if (name === undefined) return '${';
    if (end === '' || !/^[A-Za-z_][A-Za-z0-9_]*$/.test(name)) {
      problems.push('"${" does not begin a variable; write ${NAME}, or $${ for the characters');
      return whole;
    }
    const value = Object.hasOwn(environment, name) ? environment[name] : undefined;
    if (value !== undefined) return value;
    problems.push(`environment variable ${name} is not set; set it, or write $\${ for a literal`);
    return whole;
  });
  return { text: filled, problems };
}
