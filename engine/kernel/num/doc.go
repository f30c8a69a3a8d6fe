// Package num is the elementary functions with the same bits on every machine.
//
// The standard library's Exp, Log, Pow, Sin and Atan use vector or fused instructions where a machine has them, so their
// last bit depends on the processor. Here every product is rounded before it is summed (Go specification,
// "Floating-point operators"), and only operations that IEEE 754 rounds correctly are used: + - * / and square root.
//
// Float32 functions compute in float64 and round once; the measured errors stand beside them. Names ending in Wide are
// the float64 forms. Nothing here fails: arguments outside a domain give NaN, as in IEEE 754.
// May import: nothing. Start at Pow, then SinCos.
package num
