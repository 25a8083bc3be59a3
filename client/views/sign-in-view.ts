import { css, html, LitElement } from "lit";
import { api } from "../data/api.ts";
import { baseStyle } from "../parts/base-style.ts";

/** The door: name and password. Fires `signed-in` when the server has let the person in. */
export class SignInView extends LitElement {
  static override properties = { trouble: { state: true }, busy: { state: true } };
  declare trouble: string | undefined;
  declare busy: boolean;

  static override styles = [
    baseStyle,
    css`
      form {
        display: grid;
        gap: 12px;
        max-width: 360px;
      }
      label {
        display: grid;
        gap: 4px;
      }
      input {
        min-height: 36px;
      }
      button {
        justify-content: center;
        min-height: 36px;
      }
      [role="alert"] {
        border-left: 4px solid var(--ink);
        padding-left: 8px;
      }
    `,
  ];

  override render() {
    return html`
      <form @submit=${this.#submit}>
        <label>Name <input name="name" autocomplete="username" required autofocus /></label>
        <label>Password <input name="password" type="password" autocomplete="current-password" required /></label>
        ${this.trouble ? html`<p role="alert">${this.trouble}</p>` : ""}
        <button ?disabled=${this.busy}>${this.busy ? "Signing in …" : "Sign in"}</button>
        <p class="quiet">Your name stands beside what you acknowledge. Do not share it.</p>
      </form>
    `;
  }

  async #submit(event: SubmitEvent): Promise<void> {
    event.preventDefault();
    const form = new FormData(event.target as HTMLFormElement);
    this.busy = true;
    this.trouble = undefined;
    try {
      await api.signIn(String(form.get("name")).trim(), String(form.get("password")));
      this.dispatchEvent(new CustomEvent("signed-in"));
    } catch (error) {
      this.trouble = (error as Error).message;
    }
    this.busy = false;
  }
}

customElements.define("mill-sign-in", SignInView);
