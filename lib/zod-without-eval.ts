import { z } from 'zod';

// The content-security policy forbids code made from text. Even zod's caught probe for it would be reported as a
// violation, so this runs before any schema is made.
z.config({ jitless: true });
