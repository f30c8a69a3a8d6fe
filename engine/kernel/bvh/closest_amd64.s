//go:build !purego

// The nearest hit, one ray after the other. Registers: walk_amd64.h.

#include "textflag.h"
#include "lanes_amd64.h"
#include "walk_amd64.h"

DATA one<>+0(SB)/4, $0x3f800000
GLOBL one<>(SB), RODATA|NOPTR, $4

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
