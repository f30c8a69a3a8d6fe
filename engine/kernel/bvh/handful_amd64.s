//go:build !purego

// Eight rays at a time against a handful of triangles. See handful_amd64.go for the layouts.
//
// Registers: SI the group of rays, AX the triangle, R8 lanes, R9 DI DX the offsets of axes KX KY KZ, Y0 Y1 Y2 the origins along
// them, Y3 Y4 the slopes. As in wide_amd64.s, differences are origin - corner.

#include "textflag.h"
#include "lanes_amd64.h"

#define G_ORG 0
#define G_SLOPE 96
#define G_NEAR 192
#define G_FAR 288
#define G_NINV 384
#define G_TMIN 480
#define G_BEST 512
#define G_TIE 544
#define G_U 576
#define G_V 608
#define G_FOUND 640
#define G_SIZE 672

#define T_LO 36
#define T_HI 48
#define T_INDEX 60
#define T_SIZE 64

DATA unit<>+0(SB)/4, $0x3f800000
GLOBL unit<>(SB), RODATA|NOPTR, $4

// One sheared coordinate: origin - corner - slope·depth.
#define SHEAR1(offset, axis, origin, slope, depth, out) \
	VBROADCASTSS offset(AX)(axis*1), out \
	VMULPS slope, depth, Y14 \
	VSUBPS out, origin, out \
	VSUBPS Y14, out, out

// Depths to Y5 Y6 Y7, sheared corners to Y8 to Y13. Clobbers Y14.
#define SHEARALL \
	VBROADCASTSS (AX)(DX*1), Y5 \
	VBROADCASTSS 12(AX)(DX*1), Y6 \
	VBROADCASTSS 24(AX)(DX*1), Y7 \
	VSUBPS Y5, Y2, Y5 \
	VSUBPS Y6, Y2, Y6 \
	VSUBPS Y7, Y2, Y7 \
	SHEAR1(0, R9, Y0, Y3, Y5, Y8) \
	SHEAR1(0, DI, Y1, Y4, Y5, Y9) \
	SHEAR1(12, R9, Y0, Y3, Y6, Y10) \
	SHEAR1(12, DI, Y1, Y4, Y6, Y11) \
	SHEAR1(24, R9, Y0, Y3, Y7, Y12) \
	SHEAR1(24, DI, Y1, Y4, Y7, Y13)

// From U V W in Y14 Y15 Y12: Y8 the least, Y9 the greatest, Y10 zero, Y11 the rays whose edge functions have not both signs.
#define SIGNS8 \
	VMINPS Y15, Y14, Y8 \
	VMAXPS Y15, Y14, Y9 \
	VXORPS Y10, Y10, Y10 \
	VMINPS Y12, Y8, Y8 \
	VMAXPS Y12, Y9, Y9 \
	VCMPPS $2, Y8, Y10, Y11 \
	VCMPPS $2, Y10, Y9, Y13 \
	VORPS Y13, Y11, Y11

// One axis of the triangle's box: where it is entered to Y10, left to Y13.
#define BOX1(lo, hi, row) \
	VBROADCASTSS lo(AX), Y6 \
	VBROADCASTSS hi(AX), Y7 \
	VMOVUPS (G_NINV+row)(SI), Y9 \
	VBLENDVPS Y9, Y6, Y7, Y10 \
	VBLENDVPS Y9, Y7, Y6, Y13 \
	VMOVUPS (G_NEAR+row)(SI), Y6 \
	VMOVUPS (G_FAR+row)(SI), Y7 \
	VSUBPS Y10, Y6, Y10 \
	VSUBPS Y13, Y7, Y13 \
	VMULPS Y9, Y10, Y10 \
	VMULPS Y9, Y13, Y13

// Keeps new where the mask in Y11 is set.
#define KEEP(new, at) \
	VMOVUPS at(SI), Y13 \
	VBLENDVPS Y11, new, Y13, Y13 \
	VMOVUPS Y13, at(SI)

// func handfulWide(triangles *handTriangle, n int, groups *handGroup, m int, kx, ky, kz int, l *lanes)
TEXT ·handfulWide(SB), NOSPLIT, $0-64
	MOVQ groups+16(FP), SI
	MOVQ kx+32(FP), R9
	MOVQ ky+40(FP), DI
	MOVQ kz+48(FP), DX
	MOVQ l+56(FP), R8
	SHLQ $2, R9
	SHLQ $2, DI
	SHLQ $2, DX

group:
	VMOVUPS (G_ORG+0)(SI), Y0
	VMOVUPS (G_ORG+32)(SI), Y1
	VMOVUPS (G_ORG+64)(SI), Y2
	VMOVUPS (G_SLOPE+0)(SI), Y3
	VMOVUPS (G_SLOPE+32)(SI), Y4
	MOVQ triangles+0(FP), AX
	MOVQ n+8(FP), BX

triangle:
	SHEARALL
	VMULPS Y12, Y11, Y14
	VMULPS Y13, Y10, Y15
	VSUBPS Y15, Y14, Y14 // U
	VMULPS Y8, Y13, Y15
	VMULPS Y9, Y12, Y12
	VSUBPS Y12, Y15, Y15 // V
	VMULPS Y10, Y9, Y12
	VMULPS Y11, Y8, Y13
	VSUBPS Y13, Y12, Y12 // W
	SIGNS8
	VMOVMSKPS Y11, CX
	TESTL CX, CX
	JZ next
	VCMPPS $0, Y10, Y8, Y8
	VCMPPS $0, Y10, Y9, Y9
	VORPS Y8, Y9, Y9
	VMOVMSKPS Y9, CX
	TESTL CX, CX
	JNZ onEdge

signed:
	VADDPS Y15, Y14, Y8
	VADDPS Y12, Y8, Y8
	VBROADCASTSS unit<>(SB), Y10
	VDIVPS Y8, Y10, Y8
	VMULPS Y14, Y5, Y5
	VMULPS Y15, Y6, Y6
	VMULPS Y12, Y7, Y7
	VADDPS Y6, Y5, Y5
	VADDPS Y7, Y5, Y5
	VMULPS (G_SLOPE+64)(SI), Y5, Y5
	VMOVUPS G_TMIN(SI), Y6
	VMULPS Y8, Y5, Y5 // t
	VCMPPS $1, Y5, Y6, Y6
	VCMPPS $2, G_BEST(SI), Y5, Y7
	VANDPS Y6, Y11, Y11
	VANDPS Y7, Y11, Y11
	VMOVMSKPS Y11, CX
	TESTL CX, CX
	JZ next
	VMULPS Y8, Y15, Y15 // u
	VMULPS Y8, Y12, Y12 // v
	BOX1(T_LO, T_HI, 0)
	VMOVAPS Y10, Y14
	VMOVAPS Y13, Y8
	BOX1((T_LO+4), (T_HI+4), 32)
	VMAXPS Y10, Y14, Y14
	VMINPS Y13, Y8, Y8
	BOX1((T_LO+8), (T_HI+8), 64)
	VMAXPS Y10, Y14, Y14
	VMINPS Y13, Y8, Y8
	VMAXPS Y14, Y5, Y5
	VMAXPS G_TMIN(SI), Y14, Y14
	VCMPPS $2, Y8, Y14, Y14
	VANDPS Y14, Y11, Y11

	// nearer, or as near with a lower index; both indices have their top bit flipped, for a signed comparison
	VMOVUPS G_BEST(SI), Y6
	VPBROADCASTD T_INDEX(AX), Y7
	VMOVUPS G_TIE(SI), Y8
	VCMPPS $1, Y6, Y5, Y9
	VCMPPS $0, Y6, Y5, Y10
	VPCMPGTD Y7, Y8, Y8
	VANDPS Y8, Y10, Y10
	VORPS Y10, Y9, Y9
	VANDPS Y9, Y11, Y11
	VMOVMSKPS Y11, CX
	TESTL CX, CX
	JZ next
	KEEP(Y5, G_BEST)
	KEEP(Y7, G_TIE)
	KEEP(Y15, G_U)
	KEEP(Y12, G_V)
	VORPS G_FOUND(SI), Y11, Y11
	VMOVUPS Y11, G_FOUND(SI)

next:
	ADDQ $T_SIZE, AX
	DECQ BX
	JNZ triangle
	ADDQ $G_SIZE, SI
	SUBQ $1, m+24(FP)
	JNZ group
	VZEROUPPER
	RET

onEdge: // the lanes in CX again, exactly
	VMOVUPS Y14, L_EU(R8)
	VMOVUPS Y15, L_EV(R8)
	VMOVUPS Y12, L_EW(R8)
	SHEARALL
	VMOVUPS Y8, L_AX(R8)
	VMOVUPS Y9, L_AY(R8)
	VMOVUPS Y10, L_BX(R8)
	VMOVUPS Y11, L_BY(R8)
	VMOVUPS Y12, L_CX(R8)
	VMOVUPS Y13, L_CY(R8)
	MOVQ DX, L_RUN(R8)

edge:
	TZCNTL CX, DX
	EXACT(L_CX, L_BY, L_CY, L_BX, L_EU)
	EXACT(L_AX, L_CY, L_AY, L_CX, L_EV)
	EXACT(L_BX, L_AY, L_BY, L_AX, L_EW)
	BLSRL CX, CX
	JNZ edge
	MOVQ L_RUN(R8), DX
	VMOVUPS L_EU(R8), Y14
	VMOVUPS L_EV(R8), Y15
	VMOVUPS L_EW(R8), Y12
	SIGNS8
	JMP signed

// func blockBoxesWide(b *block, n *wideNode)
//
// The boxes of a block's triangles, as the planes of a node.
TEXT ·blockBoxesWide(SB), NOSPLIT, $0-16
	MOVQ b+0(FP), AX
	MOVQ n+8(FP), DI
	MOVQ $3, CX

axis:
	VMOVUPS (AX), Y0
	VMINPS 96(AX), Y0, Y1
	VMAXPS 96(AX), Y0, Y2
	VMINPS 192(AX), Y1, Y1
	VMAXPS 192(AX), Y2, Y2
	VMOVUPS Y1, (DI)
	VMOVUPS Y2, 32(DI)
	ADDQ $32, AX
	ADDQ $64, DI
	DECQ CX
	JNZ axis
	VZEROUPPER
	RET
