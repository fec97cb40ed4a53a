import type { Operation, AnswerOf } from '#shared/contract/operation'

type Uploading<O> = { send: (file: File, at: { params: Record<string, string>, query: Record<string, string> }) => Promise<AnswerOf<O>>, progress: Ref<number | null>, cancel: () => void }

/** Sends one file as the request body, with the share sent so far; the browser's fetch does not tell it. */
export function useFileUpload<O extends Operation>(operation: O): Uploading<O> {
  const progress = ref<number | null>(null)
  let request: XMLHttpRequest | null = null

  const send: Uploading<O>['send'] = (file, { params, query }) => new Promise((resolve, reject) => {
    const current = request = new XMLHttpRequest()
    current.open(operation.method, `${operationPath(operation, params)}?${new URLSearchParams(query)}`)
    current.responseType = 'json'
    current.setRequestHeader('Content-Type', 'text/csv')
    current.upload.onprogress = ({ loaded, total }) => {
      progress.value = total > 0 ? loaded / total : null
    }
    current.onload = () => {
      progress.value = null
      if (current.status < 300) resolve(current.response as AnswerOf<O>)
      else reject(toApiProblem(current.status, current.response))
    }
    current.onerror = () => {
      progress.value = null
      reject(toApiProblem(0, null))
    }
    current.onabort = () => {
      progress.value = null
    }
    current.send(file)
  })

  return { send, progress, cancel: () => request?.abort() }
}
