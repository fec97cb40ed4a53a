import { uuidv7 } from 'uuidv7'

/** A fresh UUIDv7 as the identifier of one aggregate: `newId<StudyId>()`. */
export const newId = <Id extends string = string>() => uuidv7() as Id
