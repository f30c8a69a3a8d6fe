//go:build !purego

// Walks of a wide tree, one ray after the other. See wide_amd64.go for the layouts and wide.go for the tree.
//
// Registers throughout a walk:
//   R8 lanes   SI the ray made ready   BX top of the stack   AX node, block or child
//   R10 R11 R12  rows of the planes that the ray meets first (x, y, z), R13 R14 R15 of the others, in bytes
//   Y0 Y1 Y2 near origin   Y3 Y4 Y5 far origin   Y6 Y7 Y8 -1/direction   Y9 TMin   Y10 nearest hit so far
//
// Differences are taken as origin - corner, so that the corner can be a memory operand: every difference is the exact negative of
// the portable code's, products of two of them agree, and the factors -1/direction and -1/Dir[KZ] undo the rest.

#include "textflag.h"
#include "lanes_amd64.h"

// wideRay
#define R_NEAR 0
#define R_FAR 16
#define R_NINV 32
#define R_ORG 48
#define R_SLOPE 64
#define R_KX 80
#define R_KY 84
#define R_KZ 88
#define R_SIGNS 92
#define R_TMIN 96
#define R_TMAX 100
#define R_SIZE 128

#define H_LO 0
#define H_HI 16
#define H_NODES 32
#define H_BLOCKS 40

#define N_CHILD 192
#define B_INDEX 288

DATA signBit<>+0(SB)/4, $0x80000000
GLOBL signBit<>(SB), RODATA|NOPTR, $4
DATA minusOne<>+0(SB)/4, $0xbf800000
GLOBL minusOne<>(SB), RODATA|NOPTR, $4
DATA one<>+0(SB)/4, $0x3f800000
GLOBL one<>(SB), RODATA|NOPTR, $4
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

// Sets R10 to R15 from the signs in AX.
#define ROWS \
	MOVL AX, R10 \
	MOVL AX, R11 \
	MOVL AX, R12 \
	ANDL $1, R10 \
	ANDL $2, R11 \
	ANDL $4, R12 \
	SHLL $5, R10 \
	SHLL $4, R11 \
	SHLL $3, R12 \
	ADDL $64, R11 \
	ADDL $128, R12 \
	MOVL R10, R13 \
	MOVL R11, R14 \
	MOVL R12, R15 \
	XORL $32, R13 \
	XORL $32, R14 \
	XORL $32, R15

// Loads Y0 to Y9.
#define LOADRAY \
	VBROADCASTSS (R_NEAR+0)(SI), Y0 \
	VBROADCASTSS (R_NEAR+4)(SI), Y1 \
	VBROADCASTSS (R_NEAR+8)(SI), Y2 \
	VBROADCASTSS (R_FAR+0)(SI), Y3 \
	VBROADCASTSS (R_FAR+4)(SI), Y4 \
	VBROADCASTSS (R_FAR+8)(SI), Y5 \
	VBROADCASTSS (R_NINV+0)(SI), Y6 \
	VBROADCASTSS (R_NINV+4)(SI), Y7 \
	VBROADCASTSS (R_NINV+8)(SI), Y8 \
	VBROADCASTSS R_TMIN(SI), Y9

// Tests the eight boxes of the node at AX: where they are entered goes to Y11, the mask of those that are hit to CX. Of two zeros the maximum
// takes its first operand here, so that an entering distance is never -0.
#define BOXES \
	VSUBPS (AX)(R10*1), Y0, Y11 \
	VSUBPS (AX)(R11*1), Y1, Y12 \
	VSUBPS (AX)(R12*1), Y2, Y13 \
	VSUBPS (AX)(R13*1), Y3, Y14 \
	VSUBPS (AX)(R14*1), Y4, Y15 \
	VMULPS Y6, Y11, Y11 \
	VMULPS Y7, Y12, Y12 \
	VMULPS Y8, Y13, Y13 \
	VMAXPS Y12, Y11, Y11 \
	VSUBPS (AX)(R15*1), Y5, Y12 \
	VMULPS Y6, Y14, Y14 \
	VMULPS Y7, Y15, Y15 \
	VMULPS Y8, Y12, Y12 \
	VMAXPS Y9, Y13, Y13 \
	VMINPS Y15, Y14, Y14 \
	VMINPS Y10, Y12, Y12 \
	VMAXPS Y13, Y11, Y11 \
	VMINPS Y14, Y12, Y12 \
	VCMPPS $2, Y12, Y11, Y12 \
	VMOVMSKPS Y12, CX

// Edge functions of the block at AX: Y14 = U, Y15 = V, Y0 = W, Y5 Y6 Y7 = depths of the corners (negated), Y8 to Y13 = sheared corners
// (negated).
#define EDGES \
	MOVL R_KX(SI), R9 \
	MOVL R_KY(SI), DI \
	MOVL R_KZ(SI), DX \
	VBROADCASTSS R_ORG(SI)(R9*1), Y0 \
	VBROADCASTSS R_ORG(SI)(DI*1), Y1 \
	VBROADCASTSS R_ORG(SI)(DX*1), Y2 \
	VBROADCASTSS R_SLOPE(SI)(R9*1), Y3 \
	VBROADCASTSS R_SLOPE(SI)(DI*1), Y4 \
	VSUBPS (AX)(DX*8), Y2, Y5 \
	VSUBPS 96(AX)(DX*8), Y2, Y6 \
	VSUBPS 192(AX)(DX*8), Y2, Y7 \
	VSUBPS (AX)(R9*8), Y0, Y8 \
	VSUBPS (AX)(DI*8), Y1, Y9 \
	VSUBPS 96(AX)(R9*8), Y0, Y10 \
	VSUBPS 96(AX)(DI*8), Y1, Y11 \
	VSUBPS 192(AX)(R9*8), Y0, Y12 \
	VSUBPS 192(AX)(DI*8), Y1, Y13 \
	VMULPS Y3, Y5, Y14 \
	VMULPS Y4, Y5, Y15 \
	VMULPS Y3, Y6, Y0 \
	VMULPS Y4, Y6, Y1 \
	VMULPS Y3, Y7, Y2 \
	VMULPS Y4, Y7, Y3 \
	VSUBPS Y14, Y8, Y8 \
	VSUBPS Y15, Y9, Y9 \
	VSUBPS Y0, Y10, Y10 \
	VSUBPS Y1, Y11, Y11 \
	VSUBPS Y2, Y12, Y12 \
	VSUBPS Y3, Y13, Y13 \
	VMULPS Y12, Y11, Y14 \
	VMULPS Y13, Y10, Y1 \
	VMULPS Y8, Y13, Y15 \
	VMULPS Y9, Y12, Y2 \
	VMULPS Y10, Y9, Y0 \
	VMULPS Y11, Y8, Y3 \
	VSUBPS Y1, Y14, Y14 \
	VSUBPS Y2, Y15, Y15 \
	VSUBPS Y3, Y0, Y0

// From U, V, W: Y1 their minimum, Y2 their maximum, Y4 the triangles whose edge functions have not both signs. Clobbers Y3.
#define SIGNS \
	VMINPS Y15, Y14, Y1 \
	VMAXPS Y15, Y14, Y2 \
	VXORPS Y3, Y3, Y3 \
	VMINPS Y0, Y1, Y1 \
	VMAXPS Y0, Y2, Y2 \
	VCMPPS $2, Y1, Y3, Y4 \
	VCMPPS $2, Y3, Y2, Y3 \
	VORPS Y3, Y4, Y4

// After SIGNS: CX = those of Y4 with an edge function of zero. Clobbers Y1 to Y3.
#define ZEROS \
	VXORPS Y3, Y3, Y3 \
	VCMPPS $0, Y3, Y1, Y1 \
	VCMPPS $0, Y3, Y2, Y2 \
	VORPS Y1, Y2, Y2 \
	VMOVMSKPS Y2, CX

// Stores the sheared corners and the edge functions where EXACT finds them.
#define SAVEEDGES \
	VMOVUPS Y8, L_AX(R8) \
	VMOVUPS Y9, L_AY(R8) \
	VMOVUPS Y10, L_BX(R8) \
	VMOVUPS Y11, L_BY(R8) \
	VMOVUPS Y12, L_CX(R8) \
	VMOVUPS Y13, L_CY(R8) \
	VMOVUPS Y14, L_EU(R8) \
	VMOVUPS Y15, L_EV(R8) \
	VMOVUPS Y0, L_EW(R8)

// One axis of the triangles' own boxes: Y1 = where they are entered so far, Y2 = where they are left. row is 0, 32 or 64, at 0, 4 or 8.
#define OWNBOX(row, at) \
	VMOVUPS row(AX), Y10 \
	VMINPS (96+row)(AX), Y10, Y11 \
	VMAXPS (96+row)(AX), Y10, Y12 \
	VMINPS (192+row)(AX), Y11, Y11 \
	VMAXPS (192+row)(AX), Y12, Y12 \
	VBROADCASTSS (R_NINV+at)(SI), Y13 \
	VBROADCASTSS (R_NEAR+at)(SI), Y5 \
	VBROADCASTSS (R_FAR+at)(SI), Y6 \
	VBLENDVPS Y13, Y11, Y12, Y10 \
	VBLENDVPS Y13, Y12, Y11, Y11 \
	VSUBPS Y10, Y5, Y10 \
	VSUBPS Y11, Y6, Y11 \
	VMULPS Y13, Y10, Y10 \
	VMULPS Y13, Y11, Y11

// From the edge functions and SIGNS: leaves in CX the mask of triangles of the block at AX that are hit in (TMin, best], their distances in
// Y8, their reciprocal determinants in Y9. Jumps to none if there are none.
#define HITS(none) \
	VADDPS Y15, Y14, Y9 \
	VADDPS Y0, Y9, Y9 \
	VBROADCASTSS one<>(SB), Y10 \
	VDIVPS Y9, Y10, Y9 \
	VMULPS Y14, Y5, Y5 \
	VMULPS Y15, Y6, Y6 \
	VMULPS Y0, Y7, Y7 \
	VBROADCASTSS (R_SLOPE+12)(SI), Y10 \
	VADDPS Y6, Y5, Y5 \
	VADDPS Y7, Y5, Y5 \
	VMULPS Y10, Y5, Y5 \
	VBROADCASTSS R_TMIN(SI), Y7 \
	VBROADCASTSS L_BEST(R8), Y3 \
	VMULPS Y9, Y5, Y8 \
	VCMPPS $1, Y8, Y7, Y5 \
	VCMPPS $2, Y3, Y8, Y6 \
	VANDPS Y5, Y4, Y4 \
	VANDPS Y6, Y4, Y4 \
	VMOVMSKPS Y4, CX \
	TESTL CX, CX \
	JZ none \
	OWNBOX(0, 0) \
	VMOVAPS Y10, Y1 \
	VMOVAPS Y11, Y2 \
	OWNBOX(32, 4) \
	VMAXPS Y10, Y1, Y1 \
	VMINPS Y11, Y2, Y2 \
	OWNBOX(64, 8) \
	VMAXPS Y10, Y1, Y1 \
	VMINPS Y11, Y2, Y2 \
	VMAXPS Y1, Y8, Y8 \
	VMAXPS Y7, Y1, Y1 \
	VCMPPS $2, Y2, Y1, Y1 \
	VCMPPS $2, Y3, Y8, Y5 \
	VANDPS Y1, Y4, Y4 \
	VANDPS Y5, Y4, Y4 \
	VMOVMSKPS Y4, CX \
	TESTL CX, CX \
	JZ none

// func closestWide(entry unsafe.Pointer, rays *wideRay, n int, hits *Hit, placement uint32, l *lanes)
TEXT ·closestWide(SB), NOSPLIT, $0-48
	MOVQ rays+8(FP), SI
	MOVQ l+40(FP), R8

nextRay:
	SUBQ $1, n+16(FP)
	JLT done
	MOVL R_SIGNS(SI), AX
	TESTL AX, AX
	JS skipRay
	ROWS

	// The bound is the hit so far or TMax. A tie counts if that hit is of a later placement, never if there is none.
	MOVQ hits+24(FP), CX
	MOVL R_TMAX(SI), AX
	XORL DX, DX
	MOVL 16(CX), R9
	CMPL R9, $-1
	JEQ bounded
	MOVL (CX), AX
	MOVL $-1, DI
	CMPL placement+32(FP), R9
	CMOVLCS DI, DX

bounded:
	MOVL AX, L_BEST(R8)
	MOVL DX, L_TIE(R8)
	MOVL $0, L_FOUND(R8)
	LOADRAY
	VBROADCASTSS L_BEST(R8), Y10
	LEAQ (L_STACK+8)(R8), BX
	MOVQ $0x00000000ffffffff, AX // ends the walk: entered at 0, child -1
	MOVQ AX, L_STACK(R8)
	MOVQ entry+0(FP), AX
	JMP boxes
	PCALIGN $64

inner:
	SHLQ $8, AX
	ADDQ L_NODES(R8), AX

boxes:
	BOXES
	TESTL CX, CX
	JZ pop
	TZCNTL CX, DX
	BLSRL CX, R9
	JNZ two
	MOVL N_CHILD(AX)(DX*4), AX
	TESTL AX, AX
	JNS inner
	JMP leaf

two: // keys are distance << 32 | child; the nearest one stays in DI
	VMOVUPS Y11, L_ENTER(R8)
	MOVL L_ENTER(R8)(DX*4), DI
	MOVL N_CHILD(AX)(DX*4), DX
	SHLQ $32, DI
	ORQ DX, DI
	TZCNTL R9, DX
	MOVL L_ENTER(R8)(DX*4), CX
	MOVL N_CHILD(AX)(DX*4), DX
	SHLQ $32, CX
	ORQ DX, CX
	MOVQ DI, DX
	CMPQ DI, CX
	CMOVQHI CX, DI
	CMOVQLS CX, DX
	MOVQ DX, (BX)
	ADDQ $8, BX
	BLSRL R9, R9
	JNZ three
	MOVL DI, AX
	TESTL AX, AX
	JNS inner
	JMP leaf

three: // further ones are inserted into this node's run on the stack, farthest first
	LEAQ -8(BX), CX
	MOVQ CX, L_RUN(R8)

more:
	TZCNTL R9, DX
	MOVL L_ENTER(R8)(DX*4), CX
	MOVL N_CHILD(AX)(DX*4), DX
	SHLQ $32, CX
	ORQ DX, CX
	MOVQ DI, DX
	CMPQ DI, CX
	CMOVQHI CX, DI
	CMOVQLS CX, DX
	MOVQ BX, CX

sink:
	CMPQ DX, -8(CX)
	JLS place
	PUSHQ -8(CX)
	POPQ (CX)
	SUBQ $8, CX
	CMPQ CX, L_RUN(R8)
	JHI sink

place:
	MOVQ DX, (CX)
	ADDQ $8, BX
	BLSRL R9, R9
	JNZ more
	MOVL DI, AX
	TESTL AX, AX
	JNS inner

leaf:
	CMPL AX, $-1
	JEQ endRay
	ANDL $0x7fffffff, AX
	LEAQ (AX)(AX*4), AX
	SHLQ $6, AX
	ADDQ L_BLOCKS(R8), AX
	EDGES
	SIGNS
	VMOVMSKPS Y4, CX
	TESTL CX, CX
	JZ restore
	ZEROS
	TESTL CX, CX
	JNZ onEdge

signed:
	HITS(restore)
	VMULPS Y15, Y9, Y1
	VMULPS Y0, Y9, Y2
	VMOVUPS Y8, L_T(R8)
	VMOVUPS Y1, L_US(R8)
	VMOVUPS Y2, L_VS(R8)

pick:
	TZCNTL CX, DX
	MOVL L_T(R8)(DX*4), DI
	MOVL B_INDEX(AX)(DX*4), R9
	CMPL DI, L_BEST(R8)
	JHI pass
	JNE take
	CMPL R9, L_TIE(R8)
	JCC pass

take:
	MOVL DI, L_BEST(R8)
	MOVL R9, L_TIE(R8)
	MOVL $1, L_FOUND(R8)
	MOVL L_US(R8)(DX*4), DI
	MOVL L_VS(R8)(DX*4), R9
	MOVL DI, L_U(R8)
	MOVL R9, L_V(R8)

pass:
	BLSRL CX, CX
	JNZ pick

restore:
	LOADRAY
	VBROADCASTSS L_BEST(R8), Y10

pop:
	SUBQ $8, BX
	MOVQ (BX), AX
	MOVQ AX, DX
	SHRQ $32, DX
	CMPL DX, L_BEST(R8)
	JHI pop
	MOVL AX, AX
	TESTL AX, AX
	JNS inner
	JMP leaf

onEdge: // the lanes in CX again, exactly
	SAVEEDGES
edge:
	TZCNTL CX, DX
	EXACT(L_CX, L_BY, L_CY, L_BX, L_EU)
	EXACT(L_AX, L_CY, L_AY, L_CX, L_EV)
	EXACT(L_BX, L_AY, L_BY, L_AX, L_EW)
	BLSRL CX, CX
	JNZ edge
	VMOVUPS L_EU(R8), Y14
	VMOVUPS L_EV(R8), Y15
	VMOVUPS L_EW(R8), Y0
	SIGNS
	JMP signed

endRay:
	CMPL L_FOUND(R8), $0
	JEQ skipRay
	MOVQ hits+24(FP), CX
	MOVL L_BEST(R8), AX
	MOVL L_U(R8), DX
	MOVL L_V(R8), DI
	MOVL AX, 0(CX)
	MOVL DX, 4(CX)
	MOVL DI, 8(CX)
	MOVL L_TIE(R8), AX
	MOVL placement+32(FP), DX
	MOVL AX, 12(CX)
	MOVL DX, 16(CX)

skipRay:
	ADDQ $R_SIZE, SI
	ADDQ $20, hits+24(FP)
	JMP nextRay

done:
	VZEROUPPER
	RET

// func occludedWide(entry unsafe.Pointer, rays *wideRay, n int, blocked *bool, l *lanes)
TEXT ·occludedWide(SB), NOSPLIT, $0-40
	MOVQ rays+8(FP), SI
	MOVQ l+32(FP), R8

nextRay:
	SUBQ $1, n+16(FP)
	JLT done
	MOVQ blocked+24(FP), CX
	CMPB (CX), $0
	JNE skipRay
	MOVL R_SIGNS(SI), AX
	TESTL AX, AX
	JS skipRay
	ROWS
	MOVL R_TMAX(SI), AX
	MOVL AX, L_BEST(R8)
	LOADRAY
	VBROADCASTSS L_BEST(R8), Y10
	LEAQ (L_STACK+4)(R8), BX
	MOVL $-1, L_STACK(R8) // ends the walk
	MOVQ entry+0(FP), AX
	JMP boxes
	PCALIGN $64

inner:
	SHLQ $8, AX
	ADDQ L_NODES(R8), AX

boxes:
	BOXES
	TESTL CX, CX
	JZ pop
	TZCNTL CX, DX
	BLSRL CX, CX
	MOVL N_CHILD(AX)(DX*4), DI
	JZ down

push:
	TZCNTL CX, DX
	MOVL N_CHILD(AX)(DX*4), DX
	MOVL DX, (BX)
	ADDQ $4, BX
	BLSRL CX, CX
	JNZ push

down:
	MOVL DI, AX
	TESTL AX, AX
	JNS inner

leaf:
	CMPL AX, $-1
	JEQ skipRay
	ANDL $0x7fffffff, AX
	LEAQ (AX)(AX*4), AX
	SHLQ $6, AX
	ADDQ L_BLOCKS(R8), AX
	EDGES
	SIGNS
	VMOVMSKPS Y4, CX
	TESTL CX, CX
	JZ restore
	ZEROS
	TESTL CX, CX
	JNZ onEdge

signed:
	HITS(restore)
	VCMPPS $1, Y3, Y8, Y5 // t < TMax, where HITS lets TMax itself pass
	VANDPS Y5, Y4, Y4
	VMOVMSKPS Y4, CX
	TESTL CX, CX
	JZ restore
	MOVQ blocked+24(FP), CX
	MOVB $1, (CX)
	JMP skipRay

restore:
	LOADRAY
	VBROADCASTSS L_BEST(R8), Y10

pop:
	SUBQ $4, BX
	MOVL (BX), AX
	TESTL AX, AX
	JNS inner
	JMP leaf

onEdge:
	SAVEEDGES
edge:
	TZCNTL CX, DX
	EXACT(L_CX, L_BY, L_CY, L_BX, L_EU)
	EXACT(L_AX, L_CY, L_AY, L_CX, L_EV)
	EXACT(L_BX, L_AY, L_BY, L_AX, L_EW)
	BLSRL CX, CX
	JNZ edge
	VMOVUPS L_EU(R8), Y14
	VMOVUPS L_EV(R8), Y15
	VMOVUPS L_EW(R8), Y0
	SIGNS
	JMP signed

skipRay:
	ADDQ $R_SIZE, SI
	ADDQ $1, blocked+24(FP)
	JMP nextRay

done:
	VZEROUPPER
	RET
