//go:build !purego

// Makes rays ready for the walks in assembly.

#include "textflag.h"
#include "walk_amd64.h"

#define H_LO 0
#define H_HI 16
#define H_NODES 32
#define H_BLOCKS 40

DATA signBit<>+0(SB)/4, $0x80000000
GLOBL signBit<>(SB), RODATA|NOPTR, $4
DATA minusOne<>+0(SB)/4, $0xbf800000
GLOBL minusOne<>(SB), RODATA|NOPTR, $4
DATA marginReach<>+0(SB)/4, $0x36000000 // 2^-19
GLOBL marginReach<>(SB), RODATA|NOPTR, $4
DATA marginOrigin<>+0(SB)/4, $0x34800000 // 2^-22
GLOBL marginOrigin<>(SB), RODATA|NOPTR, $4
DATA flattest<>+0(SB)/4, $0x2b800000 // 2^-40
GLOBL flattest<>(SB), RODATA|NOPTR, $4
DATA smallest<>+0(SB)/4, $0x00800000 // 2^-126
GLOBL smallest<>(SB), RODATA|NOPTR, $4

// func prepareWide(t *wideHead, rays *geom.Ray, n int, out *wideRay)
//
// As tri.Ray.Prepare; signs is -1 for rays that can hit nothing. Many at a time, because one ray's divisions and shuffles
// would hold up its own walk, but overlap with other rays'.
TEXT ·prepareWide(SB), NOSPLIT, $0-32
	MOVQ t+0(FP), DX
	MOVQ rays+8(FP), DI
	MOVQ n+16(FP), BX
	MOVQ out+24(FP), SI
	VXORPS X15, X15, X15
	VBROADCASTSS signBit<>(SB), X14
	VBROADCASTSS minusOne<>(SB), X13
	VMOVUPS H_LO(DX), X12
	VMOVUPS H_HI(DX), X11
	XORL R11, R11

ready:
	MOVL $-1, R_SIGNS(SI)
	VMOVUPS (DI), X0
	VMOVUPS 12(DI), X1
	VMOVSS 24(DI), X2
	VMOVSS 28(DI), X3
	VMAXSS X2, X15, X2 // a NaN stays
	VADDSS X15, X2, X2 // -0 becomes +0
	VUCOMISS X2, X3
	JLS skip
	VMOVSS X2, R_TMIN(SI)
	VMOVSS X3, R_TMAX(SI)
	VBLENDPS $8, X15, X0, X0
	VBLENDPS $8, X15, X1, X1
	VMULPS X15, X0, X4
	VMULPS X15, X1, X5
	VADDPS X4, X5, X4
	VCMPPS $3, X4, X4, X4
	VMOVMSKPS X4, AX
	TESTL AX, AX
	JNZ skip // not finite
	VANDNPS X1, X14, X4 // |dir|
	VANDPS X1, X14, X5 // its signs
	VMOVD X4, AX
	VPEXTRD $1, X4, CX
	VPEXTRD $2, X4, R10
	MOVL $4, R9
	MOVL $8, R12
	CMPL CX, R10
	CMOVLCS R12, R9
	CMOVLCS R10, CX
	CMPL AX, CX
	CMOVLCC R11, R9
	CMOVLCC AX, CX
	TESTL CX, CX
	JZ skip // no direction
	MOVL R9, R_KZ(SI)
	LEAL 4(R9), R10
	CMPL R10, $12
	CMOVLEQ R11, R10
	MOVL R10, R_KX(SI)
	ADDL $4, R10
	CMPL R10, $12
	CMOVLEQ R11, R10
	MOVL R10, R_KY(SI)
	VSUBPS X0, X12, X6
	VSUBPS X0, X11, X7
	VANDNPS X6, X14, X6
	VANDNPS X7, X14, X7
	VMAXPS X6, X7, X6
	VANDNPS X0, X14, X7
	VMOVHLPS X6, X6, X8
	VMOVHLPS X7, X7, X9
	VMAXPS X6, X8, X6
	VMAXPS X7, X9, X7
	VMOVSHDUP X6, X8
	VMOVSHDUP X7, X9
	VMAXSS X6, X8, X6
	VMAXSS X7, X9, X7
	VMULSS marginReach<>(SB), X6, X6
	VMULSS marginOrigin<>(SB), X7, X7
	VADDSS X6, X7, X6
	VBROADCASTSS X6, X6
	VORPS X5, X6, X6
	VADDPS X6, X0, X7
	VSUBPS X6, X0, X8
	VMOVD CX, X9
	VMULSS flattest<>(SB), X9, X9
	VMAXSS smallest<>(SB), X9, X9
	VBROADCASTSS X9, X9
	VMAXPS X9, X4, X9
	VORPS X5, X9, X9
	VDIVPS X9, X13, X9
	VMOVUPS X7, R_NEAR(SI)
	VMOVUPS X8, R_FAR(SI)
	VMOVUPS X9, R_NINV(SI)
	VMOVUPS X0, R_ORG(SI)
	VBROADCASTSS 12(DI)(R9*1), X10
	VBLENDPS $8, X13, X1, X9
	VDIVPS X10, X9, X10 // the fourth is -1/Dir[KZ]
	VMOVUPS X10, R_SLOPE(SI)
	VMOVMSKPS X1, AX
	MOVL AX, R_SIGNS(SI)

skip:
	ADDQ $32, DI
	ADDQ $R_SIZE, SI
	DECQ BX
	JNZ ready
	VZEROUPPER
	RET
