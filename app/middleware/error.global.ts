/** An error page is shown to everybody: whoever is sent to the sign-in instead never reads what went wrong. */
export default defineNuxtRouteMiddleware((to) => {
  if (useError().value) to.meta.auth = false
})
