/**
 * The language's own names that stand in loops. Where a host embeds the script in a context of its own, each look-up of a
 * global there passes through the host (some 50 ns, ten times the work around it); so they are bound once, around the script.
 */
const NAMES = "Math,Number,Array,Object,Float64Array,Int32Array,Uint32Array,Uint8Array,Map,Set,String,NaN,Infinity,undefined";

/** What stands before and after the functions script. */
export const BOUND_BEFORE = `(function(${NAMES}){`;
export const BOUND_AFTER = `})(${NAMES});`;
