import type { HTMLAttributes } from "react";

declare module "react" {
  namespace JSX {
    interface IntrinsicElements {
      /** MathML, which React's own types leave out. */
      math: HTMLAttributes<HTMLElement> & { readonly display?: "block" };
    }
  }
}
