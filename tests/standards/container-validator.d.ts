declare module 'container-validator' {
  export default class ContainerValidator {
    /** From four letters and six digits; -1 when the library refuses them. */
    createCheckDigit(numberWithoutDigit: string): number;
  }
}
