/// <reference types="astro/client" />
declare namespace App {
  interface Locals {
    requestId: string;
    actor: import('@/domain/teams/actor.ts').Actor;
    /** The person signed in, for pages; null when nobody is. */
    person: { id: string; name: string; email: string; operator: boolean } | null;
  }
}
