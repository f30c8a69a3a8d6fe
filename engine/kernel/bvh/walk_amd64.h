// Walks of a wide tree, one ray after the other. See wide_amd64.go for the layouts and wide.go for the tree.
//
// Registers throughout a walk:
//   R8 lanes   SI the ray made ready   BX top of the stack   AX node, block or child
//   R10 R11 R12  rows of the planes that the ray meets first (x, y, z), R13 R14 R15 of the others, in bytes
//   Y0 Y1 Y2 near origin   Y3 Y4 Y5 far origin   Y6 Y7 Y8 -1/direction   Y9 TMin   Y10 nearest hit so far
//
// Differences are taken as origin - corner, so that the corner can be a memory operand: every difference is the exact negative of
// the portable code's, products of two of them agree, and the factors -1/direction and -1/Dir[KZ] undo the rest.

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

// wideNode and block
#define N_CHILD 192
#define B_INDEX 288

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
