//go:build !purego

#include "textflag.h"

// Reversal of the bits of a byte by its nibbles: the reversed nibble, moved up for the low one.
DATA reverseLow<>+0(SB)/8, $0xe060a020c0408000
DATA reverseLow<>+8(SB)/8, $0xf070b030d0509010
DATA reverseLow<>+16(SB)/8, $0xe060a020c0408000
DATA reverseLow<>+24(SB)/8, $0xf070b030d0509010
GLOBL reverseLow<>(SB), RODATA|NOPTR, $32

DATA reverseHigh<>+0(SB)/8, $0x0e060a020c040800
DATA reverseHigh<>+8(SB)/8, $0x0f070b030d050901
DATA reverseHigh<>+16(SB)/8, $0x0e060a020c040800
DATA reverseHigh<>+24(SB)/8, $0x0f070b030d050901
GLOBL reverseHigh<>(SB), RODATA|NOPTR, $32

DATA swapBytes<>+0(SB)/8, $0x0405060700010203
DATA swapBytes<>+8(SB)/8, $0x0c0d0e0f08090a0b
DATA swapBytes<>+16(SB)/8, $0x0405060700010203
DATA swapBytes<>+24(SB)/8, $0x0c0d0e0f08090a0b
GLOBL swapBytes<>(SB), RODATA|NOPTR, $32

DATA upTo8<>+0(SB)/8, $0x0000000100000000
DATA upTo8<>+8(SB)/8, $0x0000000300000002
DATA upTo8<>+16(SB)/8, $0x0000000500000004
DATA upTo8<>+24(SB)/8, $0x0000000700000006
GLOBL upTo8<>(SB), RODATA|NOPTR, $32

#define EIGHT(name, value) \
DATA name<>+0(SB)/8, $value;  \
DATA name<>+8(SB)/8, $value;  \
DATA name<>+16(SB)/8, $value; \
DATA name<>+24(SB)/8, $value; \
GLOBL name<>(SB), RODATA|NOPTR, $32

EIGHT(nibbles, 0x0f0f0f0f0f0f0f0f)
EIGHT(mul1, 0x3d20adea3d20adea)
EIGHT(mul2, 0x05526c5605526c56)
EIGHT(mul3, 0x53a2286453a22864)
EIGHT(half1, 0x5555555555555555)
EIGHT(half2, 0x3333333333333333)
EIGHT(half4, 0x0f0f0f0f0f0f0f0f)
EIGHT(half8, 0x00ff00ff00ff00ff)
EIGHT(eight, 0x0000000800000008)
EIGHT(scale, 0x3380000033800000) // 2^-24

// REVERSE turns the bits of each of x round.
#define REVERSE(x, t) \
	VPSHUFB Y12, x, x; \
	VPAND   Y15, x, t; \
	VPSRLD  $4, x, x;  \
	VPAND   Y15, x, x; \
	VPSHUFB t, Y14, t; \
	VPSHUFB x, Y13, x; \
	VPOR    t, x, x

// OWEN is the function owen, with seed and seed>>16|1.
#define OWEN(x, seed, odd, t) \
	VPMULLD mul1<>(SB), x, t; \
	VPXOR   t, x, x;          \
	VPADDD  seed, x, x;       \
	VPMULLD odd, x, x;        \
	VPMULLD mul2<>(SB), x, t; \
	VPXOR   t, x, x;          \
	VPMULLD mul3<>(SB), x, t; \
	VPXOR   t, x, x

#define HALVE(x, k, mask, t) \
	VPSRLD $k, x, t;     \
	VPAND  mask, t, t;   \
	VPXOR  t, x, x

#define UNIT(x) \
	VPSRLD    $8, x, x; \
	VCVTDQ2PS x, x;     \
	VMULPS    scale<>(SB), x, x

// SEED loads the seed at an offset of the stream, and its odd multiplier.
#define SEED(offset, seed, odd, one) \
	VPBROADCASTD offset(SI), seed; \
	VPSRLD       $16, seed, odd;   \
	VPOR         one, odd, odd

// func pointsWide(first uint32, s *stream, uv *[2]float32, eights int)
TEXT ·pointsWide(SB), NOSPLIT, $0-32
	MOVL first+0(FP), AX
	MOVQ s+8(FP), SI
	MOVQ uv+16(FP), DI
	MOVQ eights+24(FP), CX

	VMOVD        AX, X0
	VPBROADCASTD X0, Y0
	VPADDD       upTo8<>(SB), Y0, Y0
	VMOVDQU      nibbles<>(SB), Y15
	VMOVDQU      reverseLow<>(SB), Y14
	VMOVDQU      reverseHigh<>(SB), Y13
	VMOVDQU      swapBytes<>(SB), Y12
	MOVL         $1, AX
	VMOVD        AX, X5
	VPBROADCASTD X5, Y5
	SEED(0, Y11, Y10, Y5)
	SEED(4, Y9, Y8, Y5)
	SEED(8, Y7, Y6, Y5)

loop:
	VMOVDQA Y0, Y1
	VPADDD  eight<>(SB), Y0, Y0
	REVERSE(Y1, Y2)
	OWEN(Y1, Y11, Y10, Y2)
	REVERSE(Y1, Y2)
	VMOVDQA Y1, Y3
	OWEN(Y1, Y9, Y8, Y2)
	REVERSE(Y1, Y2)
	UNIT(Y1)
	HALVE(Y3, 1, half1<>(SB), Y4)
	HALVE(Y3, 2, half2<>(SB), Y4)
	HALVE(Y3, 4, half4<>(SB), Y4)
	HALVE(Y3, 8, half8<>(SB), Y4)
	VPSRLD  $16, Y3, Y4
	VPXOR   Y4, Y3, Y3
	OWEN(Y3, Y7, Y6, Y4)
	REVERSE(Y3, Y4)
	UNIT(Y3)
	VUNPCKLPS  Y3, Y1, Y4
	VUNPCKHPS  Y3, Y1, Y5
	VPERM2F128 $0x20, Y5, Y4, Y1
	VPERM2F128 $0x31, Y5, Y4, Y3
	VMOVUPS    Y1, (DI)
	VMOVUPS    Y3, 32(DI)
	ADDQ       $64, DI
	DECQ       CX
	JNZ        loop
	VZEROUPPER
	RET
