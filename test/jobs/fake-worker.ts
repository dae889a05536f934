import { type Endpoint, expose } from 'comlink'

/** A worker whose thread is the other end of a message channel: real messages, real copies, nothing shared. */
export class FakeWorker extends EventTarget {
  terminated = false
  readonly #near: MessagePort
  readonly #far: MessagePort

  constructor(api: object) {
    super()
    const { port1, port2 } = new MessageChannel()
    this.#near = port1
    this.#far = port2
    port1.start()
    expose(api, port2 as Endpoint)
  }

  postMessage(message: unknown, transfer: Transferable[] = []) {
    if (!this.terminated) this.#near.postMessage(message, transfer)
  }

  override addEventListener(type: string, listener: EventListener) {
    if (type === 'message') this.#near.addEventListener(type, listener)
    else super.addEventListener(type, listener)
  }

  override removeEventListener(type: string, listener: EventListener) {
    if (type === 'message') this.#near.removeEventListener(type, listener)
    else super.removeEventListener(type, listener)
  }

  terminate() {
    this.terminated = true
    this.#near.close()
    this.#far.close()
  }
}
