//go:build !purego

// The three loops in which a build spends its time. See sah.go for what they compute and sah_amd64.go for layouts.

#include "textflag.h"

DATA lastBin<>+0(SB)/4, $15
GLOBL lastBin<>(SB), RODATA|NOPTR, $4

// func fillBinsWide(refs *ref, n int, t *binTable, from, scale *[4]float32)
//
// t: 16 boxes of 32 bytes for each axis, then, from 1536 on, 16 counts for each.
TEXT ·fillBinsWide(SB), NOSPLIT, $0-40
	MOVQ refs+0(FP), SI
	MOVQ n+8(FP), CX
	MOVQ t+16(FP), DI
	MOVQ from+24(FP), AX
	MOVQ scale+32(FP), BX
	VMOVUPS (AX), X8
	VMOVUPS (BX), X9
	VBROADCASTSS lastBin<>(SB), X10

each:
	VMOVUPS (SI), Y0
	VEXTRACTF128 $1, Y0, X1
	VSUBPS X1, X0, X1 // lo + hi, since hi is kept negative
	VSUBPS X8, X1, X1
	VMULPS X9, X1, X1
	VCVTTPS2DQ X1, X1
	VPAND X10, X1, X1 // a centre that overflowed is no bin's
	VPEXTRQ $0, X1, AX
	VPEXTRD $2, X1, DX
	MOVQ AX, BX
	SHRQ $32, BX
	MOVL AX, AX
	INCL 1536(DI)(AX*4)
	INCL 1600(DI)(BX*4)
	INCL 1664(DI)(DX*4)
	SHLQ $5, AX
	SHLQ $5, BX
	SHLQ $5, DX
	VMINPS 0(DI)(AX*1), Y0, Y2
	VMINPS 512(DI)(BX*1), Y0, Y3
	VMINPS 1024(DI)(DX*1), Y0, Y4
	VMOVUPS Y2, 0(DI)(AX*1)
	VMOVUPS Y3, 512(DI)(BX*1)
	VMOVUPS Y4, 1024(DI)(DX*1)
	ADDQ $32, SI
	DECQ CX
	JNZ each
	VZEROUPPER
	RET

// func boundWide(refs *ref, n int, bounds, centres *slab)
TEXT ·boundWide(SB), NOSPLIT, $0-32
	MOVQ refs+0(FP), SI
	MOVQ n+8(FP), CX
	MOVQ bounds+16(FP), AX
	MOVQ centres+24(FP), BX
	VMOVUPS (AX), Y4
	VMOVUPS (BX), Y5
	VMOVAPS Y4, Y6
	VMOVAPS Y5, Y7
	SUBQ $2, CX
	JLT last

two:
	VMOVUPS (SI), Y0
	VMOVUPS 32(SI), Y1
	VPERM2F128 $1, Y0, Y0, Y2
	VPERM2F128 $1, Y1, Y1, Y3
	VSUBPS Y2, Y0, Y2 // lo + hi, and its negative
	VSUBPS Y3, Y1, Y3
	VMINPS Y0, Y4, Y4
	VMINPS Y1, Y6, Y6
	VMINPS Y2, Y5, Y5
	VMINPS Y3, Y7, Y7
	ADDQ $64, SI
	SUBQ $2, CX
	JGE two

last:
	ADDQ $2, CX
	JZ done
	VMOVUPS (SI), Y0
	VPERM2F128 $1, Y0, Y0, Y2
	VSUBPS Y2, Y0, Y2
	VMINPS Y0, Y4, Y4
	VMINPS Y2, Y5, Y5

done:
	VMINPS Y6, Y4, Y4
	VMINPS Y7, Y5, Y5
	VMOVUPS Y4, (AX)
	VMOVUPS Y5, (BX)
	VZEROUPPER
	RET

// func sweepWide(first *slab, stride, n int, areas *float32, areaStride int)
TEXT ·sweepWide(SB), NOSPLIT, $0-40
	MOVQ first+0(FP), SI
	MOVQ stride+8(FP), BX
	MOVQ n+16(FP), CX
	MOVQ areas+24(FP), DI
	MOVQ areaStride+32(FP), DX
	VMOVUPS (SI), Y0
	VXORPS X7, X7, X7

each:
	VMINPS (SI), Y0, Y0
	VEXTRACTF128 $1, Y0, X1
	VADDPS X1, X0, X1
	VSUBPS X1, X7, X1 // extent
	VMAXPS X7, X1, X1 // 0 where empty
	VPERMILPS $0xc9, X1, X2 // y z x
	VMULPS X2, X1, X1 // xy yz zx
	VMOVSHDUP X1, X3
	VMOVHLPS X1, X1, X4
	VADDSS X3, X1, X1
	VADDSS X4, X1, X1
	VMOVSS X1, (DI)
	ADDQ BX, SI
	ADDQ DX, DI
	DECQ CX
	JNZ each
	VZEROUPPER
	RET
