import { runCheck } from './runCheck'

const { code, out, errors } = await runCheck(process.argv.slice(2))
for (const error of errors) process.stderr.write(`${error}\n`)
process.stdout.write(out)
process.exitCode = code
