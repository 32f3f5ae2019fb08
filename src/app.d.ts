import type { Role } from '$lib/model/role';

declare global {
  namespace App {
    interface Person {
      id: string;
      name: string;
      email: string;
    }

    /** The signed-in person in the team they act for. */
    interface Member {
      personId: string;
      personName: string;
      teamId: string;
      teamName: string;
      /** The team's data are simulated (the demo); shown wherever they are seen. */
      teamSimulated: boolean;
      role: Role;
    }

    interface Locals {
      /** For log lines and the error page. */
      requestId: string;
      person: Person | null;
      sessionId: string | null;
      member: Member | null;
      /** All teams of the person, for the switch in the header. */
      memberships: Member[];
      theme: 'light' | 'dark' | 'system';
    }

    interface Error {
      code: string;
      message: string;
      /** Random, logged with the context; the only thing a person sees of an unexpected error. */
      id?: string;
    }

    interface PageData {
      meta?: { title: string };
      /** The path below the team, shown in the header; the last one is this page. */
      crumbs?: { label: string; href?: string }[];
    }
  }
}

export {};
