//go:build !purego

// Any hit, one ray after the other. Registers: walk_amd64.h.

#include "textflag.h"
#include "lanes_amd64.h"
#include "walk_amd64.h"

DATA one<>+0(SB)/4, $0x3f800000
GLOBL one<>(SB), RODATA|NOPTR, $4

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
