//go:build !purego

// Bounds of a bundle of rays, and its test against the boxes of a node. See bundle.go.

#include "textflag.h"

DATA plusInf<>+0(SB)/4, $0x7f800000
GLOBL plusInf<>(SB), RODATA|NOPTR, $4
DATA minusInf<>+0(SB)/4, $0xff800000
GLOBL minusInf<>(SB), RODATA|NOPTR, $4
DATA notSign<>+0(SB)/4, $0x7fffffff
GLOBL notSign<>(SB), RODATA|NOPTR, $4

// func bundleEndsWide(rays *geom.Ray, n int, e *bundleBounds)
//
// A minimum or maximum takes its first operand here where one is NaN: the bound so far.
TEXT ·bundleEndsWide(SB), NOSPLIT, $0-24
	MOVQ rays+0(FP), SI
	MOVQ n+8(FP), CX
	MOVQ e+16(FP), DI
	VBROADCASTSS plusInf<>(SB), X4
	VBROADCASTSS minusInf<>(SB), X5
	VMOVAPS X4, X6
	VMOVAPS X5, X7
	VXORPS X8, X8, X8 // some sign is negative
	VPCMPEQD X9, X9, X9 // all signs are negative
	XORL DX, DX
	MOVQ CX, R9
	MOVQ CX, R10 // a live one, counted from the end

ray:
	VMOVSS 24(SI), X0
	VMOVSS 28(SI), X1
	VUCOMISS X0, X1
	JLS next // TMax is not above TMin, or one is NaN
	INCL DX
	MOVQ CX, R10
	VMOVUPS (SI), X0
	VMOVUPS 12(SI), X2
	VBROADCASTSS X1, X1
	VMULPS X1, X2, X1
	VADDPS X1, X0, X1
	VMINPS X4, X0, X4
	VMAXPS X5, X0, X5
	VMINPS X6, X1, X6
	VMAXPS X7, X1, X7
	VORPS X2, X8, X8
	VANDPS X2, X9, X9

next:
	ADDQ $32, SI
	DECQ CX
	JNZ ray
	VMOVUPS X4, 0(DI)
	VMOVUPS X5, 16(DI)
	VMOVUPS X6, 32(DI)
	VMOVUPS X7, 48(DI)
	VMOVMSKPS X8, AX
	MOVL AX, 64(DI)
	VMOVMSKPS X9, AX
	MOVL AX, 68(DI)
	MOVL DX, 72(DI)
	SUBQ R10, R9
	MOVL R9, 76(DI)
	RET

// func bundleSpanWide(rays *geom.Ray, n int, axis int, z0, z1 float32, s *bundleSpans)
TEXT ·bundleSpanWide(SB), NOSPLIT, $0-40
	MOVQ rays+0(FP), SI
	MOVQ n+8(FP), CX
	MOVQ axis+16(FP), BX
	VMOVSS z0+24(FP), X10
	VMOVSS z1+28(FP), X11
	MOVQ s+32(FP), DI
	VBROADCASTSS plusInf<>(SB), X4
	VBROADCASTSS minusInf<>(SB), X5
	VMOVAPS X4, X6
	VMOVAPS X5, X7
	VBROADCASTSS notSign<>(SB), X9
	VXORPS X8, X8, X8

ray:
	VMOVSS 24(SI), X0
	VMOVSS 28(SI), X1
	VUCOMISS X0, X1
	JLS next
	VBROADCASTSS 12(SI)(BX*4), X1
	VMOVUPS 12(SI), X2
	VDIVPS X1, X2, X2 // slopes
	VMOVUPS (SI), X0
	VMOVSS (SI)(BX*4), X3
	VSUBSS X3, X10, X12
	VSUBSS X3, X11, X13
	VBROADCASTSS X12, X12
	VBROADCASTSS X13, X13
	VMULPS X2, X12, X12
	VMULPS X2, X13, X13
	VADDPS X0, X12, X12
	VADDPS X0, X13, X13
	VMINPS X4, X12, X4
	VMAXPS X5, X12, X5
	VMINPS X6, X13, X6
	VMAXPS X7, X13, X7
	VANDPS X9, X2, X2
	VMAXPS X8, X2, X8

next:
	ADDQ $32, SI
	DECQ CX
	JNZ ray
	VMOVUPS X4, 0(DI)
	VMOVUPS X5, 16(DI)
	VMOVUPS X6, 32(DI)
	VMOVUPS X7, 48(DI)
	VMOVUPS X8, 64(DI)
	RET

// SIDE bounds the line base + (z - z0)·slope over [Y2, Y3] and leaves the ends in Y4 and Y5.
#define SIDE(base, slope) \
	VBROADCASTSS base(SI), Y6 \
	VBROADCASTSS slope(SI), Y7 \
	VMULPS Y7, Y2, Y4 \
	VMULPS Y7, Y3, Y5 \
	VADDPS Y6, Y4, Y4 \
	VADDPS Y6, Y5, Y5

// func shaftMaskWide(n *wideNode, s *shaft) uint32
TEXT ·shaftMaskWide(SB), NOSPLIT, $0-20
	MOVQ n+0(FP), AX
	MOVQ s+8(FP), SI
	MOVQ 0(SI), R9  // rows of x
	MOVQ 8(SI), R10 // of y
	MOVQ 16(SI), R11 // of z
	VBROADCASTSS 24(SI), Y0 // z0
	VBROADCASTSS 28(SI), Y1 // z1
	VMAXPS (AX)(R11*1), Y0, Y2
	VMINPS 32(AX)(R11*1), Y1, Y3
	VCMPPS $2, Y3, Y2, Y8 // the depths overlap
	VSUBPS Y0, Y2, Y2
	VSUBPS Y0, Y3, Y3
	SIDE(32, 48)
	VMINPS Y4, Y5, Y4
	VCMPPS $2, 32(AX)(R9*1), Y4, Y4 // lower side <= upper plane
	VANDPS Y4, Y8, Y8
	SIDE(36, 52)
	VMAXPS Y4, Y5, Y4
	VCMPPS $13, (AX)(R9*1), Y4, Y4 // upper side >= lower plane
	VANDPS Y4, Y8, Y8
	SIDE(40, 56)
	VMINPS Y4, Y5, Y4
	VCMPPS $2, 32(AX)(R10*1), Y4, Y4
	VANDPS Y4, Y8, Y8
	SIDE(44, 60)
	VMAXPS Y4, Y5, Y4
	VCMPPS $13, (AX)(R10*1), Y4, Y4
	VANDPS Y4, Y8, Y8
	VMOVMSKPS Y8, AX
	MOVL AX, ret+16(FP)
	VZEROUPPER
	RET
