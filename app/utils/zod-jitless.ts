import { z } from 'zod'

// The content security policy forbids code made from text; without this zod would try it once and be reported. Imported
// first by whatever starts a thread of execution: the page and its worker.
z.config({ jitless: true })
