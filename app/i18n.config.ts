import { catalogue } from '#shared/wording/catalogue'

/** Every visible text comes from shared/wording, which the server's mails and memos read as well. */
export default { legacy: false, locale: 'en', fallbackLocale: 'en', messages: { en: catalogue.en } }
