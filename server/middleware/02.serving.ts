/** Nothing of the interface is served before the database role has been found fit; without a database it answers 503. */
export default defineEventHandler(async (event) => {
  if (event.path.startsWith('/api/')) await fitToServe()
})
