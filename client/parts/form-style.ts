import { css } from "lit";

/** Forms beside a record: one field under the other, each under its label. */
export const formStyle = css`
  form {
    display: grid;
    gap: 8px;
    justify-items: start;
  }
  form + form {
    margin-top: 12px;
  }
  label {
    display: grid;
    gap: 2px;
    width: 100%;
  }
  textarea {
    font: inherit;
    color: var(--ink);
    background: var(--lane);
    border: 1px solid var(--edge);
    border-radius: 4px;
    padding: 4px 8px;
    min-height: 62px;
    resize: vertical;
    width: 100%;
  }
  select,
  input:not([type="checkbox"]) {
    width: 100%;
    min-width: 0;
  }
  h3 {
    margin-top: 8px;
  }
  [role="alert"] {
    border-left: 4px solid var(--ink);
    padding-left: 8px;
  }
`;
