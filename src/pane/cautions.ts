/** What every pane and check sheet says about what this cannot tell. */
export const CAUTIONS: readonly string[] = [
  "A planning aid. Every rate is taken as constant: neither wear, nor learning, nor the time already spent in a state changes it.",
  "Limited crews and exponential repair over- or understate real repair times.",
  "Not a safety, clinical, credit or legal determination. Functional safety follows the applicable standard and local codes and competent, licensed persons; health decisions follow agency guidance and qualified clinicians; reserves need the responsible actuary.",
  "The checks find mistakes that show in a table. A table without findings can still be wrong.",
];
