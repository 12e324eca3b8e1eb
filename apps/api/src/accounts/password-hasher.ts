import { compare, hash } from 'bcryptjs';

/** bcrypt. Tests lower the cost; a server uses the default. */
export class PasswordHasher {
  private readonly nobodys: Promise<string>;

  constructor(private readonly cost = 12) {
    this.nobodys = hash('the password of nobody at all', cost);
  }

  hash(password: string): Promise<string> {
    return hash(password, this.cost);
  }

  /** Whether the password is right. Without a hash it is not, and finding that out takes as long. */
  async matches(password: string, kept: string | null): Promise<boolean> {
    const right = await compare(password, kept ?? (await this.nobodys));
    return kept !== null && right;
  }
}
