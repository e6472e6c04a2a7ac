import { JOBS } from './jobs.ts'
import { serveJobs } from './serve-jobs.ts'

serveJobs(JOBS)
