import access from './en/access.json'
import base from './en/base.json'
import deviation from './en/deviation.json'
import extract from './en/extract.json'
import mail from './en/mail.json'
import memo from './en/memo.json'
import pages from './en/pages.json'
import plan from './en/plan.json'
import problems from './en/problems.json'
import record from './en/record.json'
import verdict from './en/verdict.json'

/** The words of the product by locale; each file is one namespace. */
export const catalogue = {
  en: { access, base, deviation, extract, mail, memo, pages, plan, problems, record, verdict },
} as const

export type Locale = keyof typeof catalogue
